// In the worker: a message that holds a map named `trapped` arms the trap.
(() => {
  const names = (value, depth) => {
    if (typeof value === "string") return value.includes("trapped");
    if (value instanceof Uint8Array) return new TextDecoder().decode(value).includes("trapped");
    return depth < 5 && value !== null && typeof value === "object" && Object.values(value).some((part) => names(part, depth + 1));
  };
  self.addEventListener("message", (event) => {
    if (names(event.data, 0)) globalThis.armTrap();
  });
})();
