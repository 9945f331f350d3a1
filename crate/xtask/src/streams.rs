//! A WebAssembly module taken apart into streams of like parts, which pack better than the module does.
//!
//! Opcodes, offsets in memory, constants, called functions and so on are each foretold by their own kind. A local is
//! told by its rank among those used last in the function; sizes of functions follow from their content, and alignments,
//! which are hints, from the instruction. Constants of 32 bits have a stream for each opcode that may follow, since that
//! tells what they are: a place on the stack, a length, a place of a text. `www/engine/streams.js` puts the module together
//! again (numbers of opcodes and their operands: WebAssembly specification 2.0, §5.4).

use anyhow::{Context, Result, bail};

const COUNT: usize = 14 + 256;
const HEAD: usize = 0;
const TAIL: usize = 1;
const OPCODES: usize = 2;
const VARIABLES: usize = 3;
const READ: usize = 4;
const WRITTEN: usize = 5;
const OFFSETS: usize = 6;
const I64: usize = 7;
const CALLS: usize = 8;
const BRANCHES: usize = 9;
const TABLES: usize = 10;
const BYTES: usize = 11;
const BLOCKS: usize = 12;
const OTHER: usize = 13;
/// And the opcode that follows.
const I32: usize = 14;

/// Base-2 logarithms of the bytes that the instructions 0x28 to 0x3e load or store.
const NATURAL: &[u8; 23] = b"23230011001122232301012";
/// The same for those with the prefix 0xfd: 0 to 11, and 84 to 93.
const NATURAL_WIDE: [&[u8]; 2] = [b"433333301234", b"0123012323"];

/// Lengths of the module and of each stream, four bytes each, the lowest first, and the streams; and the module with
/// natural alignments, which is what is put together from them.
pub fn taken_apart(module: &[u8]) -> Result<(Vec<u8>, Vec<u8>)> {
    let mut apart = Apart { module: module.to_vec(), at: 8, streams: vec![Vec::new(); COUNT] };
    while apart.module.get(apart.at) != Some(&10) {
        apart.at += 1;
        let size = apart.number()?.0;
        apart.at += size as usize;
    }
    apart.at += 1;
    let end = apart.number()?.0 as usize + apart.at;
    apart.streams[HEAD] = module[..apart.at].to_vec();
    for _ in 0..apart.keep(OPCODES)? {
        let size = apart.number()?.0 as usize;
        let from = apart.at;
        apart.function().with_context(|| format!("in the function at byte {from} of the module"))?;
        if apart.at != from + size {
            bail!("the function at byte {from} of the module is not {size} bytes long");
        }
    }
    if apart.at != end {
        bail!("the module's functions are not as long as their section");
    }
    apart.streams[TAIL] = module[end..].to_vec();
    let lengths = [module.len()].into_iter().chain(apart.streams.iter().map(Vec::len));
    let mut bytes: Vec<u8> = lengths.flat_map(|length| (length as u32).to_le_bytes()).collect();
    bytes.extend(apart.streams.concat());
    Ok((bytes, apart.module))
}

struct Apart {
    module: Vec<u8>,
    at: usize,
    streams: Vec<Vec<u8>>,
}

impl Apart {
    fn byte(&mut self) -> Result<u8> {
        self.at += 1;
        self.module.get(self.at - 1).copied().context("the module ends early")
    }

    /// A number in groups of seven bits, and where it starts.
    fn number(&mut self) -> Result<(u64, usize)> {
        let (from, mut value) = (self.at, 0);
        loop {
            let byte = self.byte()?;
            value |= u64::from(byte & 127).unbounded_shl(7 * (self.at - from - 1) as u32);
            if byte < 128 {
                return Ok((value, from));
            }
        }
    }

    fn keep(&mut self, stream: usize) -> Result<u64> {
        let (value, from) = self.number()?;
        self.streams[stream].extend(&self.module[from..self.at]);
        Ok(value)
    }

    fn bytes(&mut self, count: usize) -> Result<()> {
        for _ in 0..count {
            let byte = self.byte()?;
            self.streams[BYTES].push(byte);
        }
        Ok(())
    }

    fn memory(&mut self, natural: u8) -> Result<()> {
        let natural = natural - b'0';
        if self.byte()? > natural {
            bail!("an alignment is no plain one");
        }
        self.module[self.at - 1] = natural;
        self.keep(OFFSETS).map(drop)
    }

    fn local(&mut self, stream: usize, recent: &mut Vec<u64>) -> Result<()> {
        let local = self.number()?.0;
        recent.extend(recent.len() as u64..=local);
        let rank = recent.iter().position(|one| *one == local).context("a local")?;
        recent[..=rank].rotate_right(1);
        let mut rest = rank;
        while rest > 127 {
            self.streams[stream].push(rest as u8 | 128);
            rest >>= 7;
        }
        self.streams[stream].push(rest as u8);
        Ok(())
    }

    fn function(&mut self) -> Result<()> {
        for _ in 0..self.keep(VARIABLES)? {
            self.keep(VARIABLES)?;
            self.keep(VARIABLES)?;
        }
        let (mut depth, mut recent) = (1, Vec::new());
        while depth > 0 {
            let opcode = self.byte()?;
            self.streams[OPCODES].push(opcode);
            match opcode {
                0x0b => depth -= 1,
                0x02..=0x04 => {
                    depth += 1;
                    self.keep(BLOCKS)?;
                }
                0x00 | 0x01 | 0x05 | 0x0f | 0x1a | 0x1b | 0x45..=0xc4 | 0xd1 => {}
                0x0c | 0x0d => drop(self.keep(BRANCHES)?),
                0x0e => {
                    for _ in 0..=self.keep(TABLES)? {
                        self.keep(TABLES)?;
                    }
                }
                0x10 => drop(self.keep(CALLS)?),
                0x11 => self.others(2)?,
                0x20 => self.local(READ, &mut recent)?,
                0x21 | 0x22 => self.local(WRITTEN, &mut recent)?,
                0x23..=0x26 | 0x3f | 0x40 | 0xd0 | 0xd2 => self.others(1)?,
                0x28..=0x3e => self.memory(NATURAL[usize::from(opcode) - 0x28])?,
                0x41 => {
                    let (_, from) = self.number()?;
                    let next = self.module.get(self.at).context("the module ends early")?;
                    self.streams[I32 + usize::from(*next)].extend(&self.module[from..self.at]);
                }
                0x42 => drop(self.keep(I64)?),
                0x43 => self.bytes(4)?,
                0x44 => self.bytes(8)?,
                0xfc => match self.keep(OPCODES)? {
                    0..=7 => {}
                    8 | 10 | 12 | 14 => self.others(2)?,
                    9..=17 => self.others(1)?,
                    other => bail!("the instruction 0xfc {other} is unknown"),
                },
                0xfd => match self.keep(OPCODES)? as usize {
                    wide @ 0..=11 => self.memory(NATURAL_WIDE[0][wide])?,
                    12 | 13 => self.bytes(16)?,
                    21..=34 => self.bytes(1)?,
                    wide @ 84..=93 => {
                        self.memory(NATURAL_WIDE[1][wide - 84])?;
                        self.bytes(usize::from(wide < 92))?;
                    }
                    _ => {}
                },
                _ => bail!("the instruction {opcode:#x} is unknown"),
            }
        }
        Ok(())
    }

    fn others(&mut self, count: usize) -> Result<()> {
        (0..count).try_for_each(|_| self.keep(OTHER).map(drop))
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    /// The names of the streams in the sample, but for those of constants, which bear the number of an opcode.
    const NAMES: [&str; I32] = [
        "head",
        "tail",
        "opcodes",
        "variables",
        "read",
        "written",
        "offsets",
        "i64",
        "calls",
        "branches",
        "tables",
        "bytes",
        "blocks",
        "other",
    ];

    /// A module by hand and its streams; `tests/js/packed.mjs` puts the same together.
    #[test]
    fn a_module_comes_apart_as_by_hand() {
        let sample = include_str!("../../../tests/data/streams.tsv");
        let hex = |text: &str| -> Vec<u8> {
            text.split_whitespace().map(|byte| u8::from_str_radix(byte, 16).unwrap()).collect()
        };
        let (mut module, mut streams) = (Vec::new(), vec![Vec::new(); COUNT]);
        for line in sample.lines().filter(|line| !line.starts_with('#')) {
            let [name, inside, apart] = line.split('\t').collect::<Vec<_>>()[..] else { panic!("{line}") };
            module.extend(hex(inside));
            if name != "-" {
                let constant = || I32 + usize::from_str_radix(name.strip_prefix("i32 ").unwrap(), 16).unwrap();
                let stream = NAMES.iter().position(|one| *one == name).unwrap_or_else(constant);
                streams[stream].extend(hex(apart));
            }
        }
        let (bytes, natural) = taken_apart(&module).unwrap();
        assert_eq!(natural, module);
        let lengths: Vec<u8> = streams.iter().flat_map(|one| (one.len() as u32).to_le_bytes()).collect();
        assert_eq!(bytes, [&(module.len() as u32).to_le_bytes()[..], &lengths, &streams.concat()].concat());
        let low = module.windows(3).position(|three| three == [0x29, 3, 0x10]).unwrap();
        module[low + 1] = 0;
        assert_eq!(taken_apart(&module).unwrap(), (bytes, natural), "a lower alignment is a hint");
        module[low] = 0xff;
        assert!(format!("{:#}", taken_apart(&module).unwrap_err()).ends_with("0xff is unknown"));
    }
}
