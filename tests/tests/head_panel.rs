//! The head's panel: what the head is, the published choices, free editing, and the way back.
use inward_tests::{Browser, Page, in_both_browsers};
use serde_json::Value;

fn number(value: &Value) -> f64 {
    value.as_f64().unwrap_or_else(|| panic!("{value} is a number"))
}

fn shells(report: &Value) -> Vec<(String, f64, f64)> {
    let of = |shell: &Value| {
        let radius = number(&shell["outer_radius_mm"]);
        (shell["tissue"].as_str().unwrap().to_owned(), radius, number(&shell["conductivity_s_per_m"]))
    };
    report["head"]["shells"].as_array().unwrap().iter().map(of).collect()
}

/// A page with an example, its head panel open and its titles and ids in order.
fn with_head(browser: Browser) -> (Page, Value) {
    let page = Page::open(browser);
    page.click("#empty [data-example='lamp']");
    page.wait_for_answer();
    page.value(
        "for (const part of document.querySelectorAll('#head-panel details, details#head-panel')) part.open = true",
    );
    let report = page.report();
    (page, report)
}

/// Radius, deviations, shells and conductivities are shown, and the numbers state the head.
fn the_head_is_told(browser: Browser) {
    let (page, report) = with_head(browser);
    let head = &report["head"];
    let shown = page.text("#head-panel").replace('\u{a0}', " ");
    for key in ["radius_mm", "fit_rms_mm", "fit_max_mm"] {
        assert!(shown.contains(&format!("{:.1}", number(&head[key]))), "{key} {} stands in {shown}", head[key]);
    }
    let values = page.value(
        "return [...document.querySelectorAll('#head-panel input')].map((input) => input.value).filter((text) => text !== '')",
    );
    let values: Vec<f64> = values.as_array().unwrap().iter().filter_map(|text| text.as_str()?.parse().ok()).collect();
    for (tissue, _, conductivity) in shells(&report) {
        assert!(
            values.iter().any(|value| (value - conductivity).abs() < 1e-9),
            "{tissue}: {conductivity} in {values:?}"
        );
    }
    let title = page.text("#head-title");
    assert!(!title.is_empty());
    let answer = format!("{}\n{}", page.text("#numbers"), page.text("#sentence")).to_lowercase();
    assert!(answer.contains("shell") || answer.contains("spher"), "the result states its head: {answer}");
    let name = head["name"].as_str().expect("the head in use is one of the catalogue").to_owned();
    assert!(page.exists(&format!("input[name=head][value='{name}']:checked")), "{name} is the one chosen");
}

/// Each published choice has its source beside it, changes the answer, and the first leads back to the same numbers.
fn published_heads_are_chosen_and_left_again(browser: Browser) {
    let (page, before) = with_head(browser);
    let names = page.value("return [...document.querySelectorAll('input[name=head]')].map((input) => input.value).filter((value) => value !== 'edited')");
    let names: Vec<&str> = names.as_array().unwrap().iter().map(|name| name.as_str().unwrap()).collect();
    assert!(names.len() >= 3, "{names:?}");
    let unsourced = page.value(
        "return [...document.querySelectorAll('input[name=head]')].filter((input) => input.value !== 'edited' && !/(19|20)\\d\\d/.test(input.closest('label, li, div').innerText)).map((input) => input.value)",
    );
    assert_eq!(unsourced, serde_json::json!([]), "a year of publication stands beside each");
    let standard = before["head"]["name"].as_str().unwrap();
    let mut answers = vec![number(&before["maps"][0]["dipole"]["eccentricity"])];
    for name in names.iter().filter(|name| **name != standard) {
        page.click(&format!("input[name=head][value='{name}']"));
        let report = page.report_when(name, |report| report["head"]["name"] == *name);
        assert_ne!(shells(&report), shells(&before), "{name}");
        assert_eq!(report["head"]["radius_mm"], before["head"]["radius_mm"], "{name}: the electrodes have not moved");
        answers.push(number(&report["maps"][0]["dipole"]["eccentricity"]));
    }
    assert!(answers.iter().any(|e| (e - answers[0]).abs() > 0.005), "other heads, other depths: {answers:?}");
    page.click(&format!("input[name=head][value='{standard}']"));
    let back = page.report_when("the first head", |report| report["head"]["name"] == standard);
    assert_eq!(back["maps"], before["maps"]);
    assert_eq!(back["head"], before["head"]);
}

/// A conductivity and the radius typed in; nonsense is refused beside the field and the answer stays; the ways back.
fn a_head_is_edited_and_taken_back(browser: Browser) {
    let (page, before) = with_head(browser);
    let skull = shells(&before).iter().position(|(tissue, ..)| tissue == "skull").expect("the head has a skull");
    let field = format!("#shells .shell-conductivity >> {skull}");
    let fill = |text: &str| {
        let (selector, at) = field.split_once(" >> ").unwrap();
        let script = format!(
            "for (const [k, e] of [...document.querySelectorAll('{selector}')].map((e) => e.matches('input') ? e : e.querySelector('input')).entries()) e.id ||= 'conductivity-' + k; return [...document.querySelectorAll('{selector}')].map((e) => e.matches('input') ? e : e.querySelector('input'))[{at}].id"
        );
        let id = page.value(&script).as_str().unwrap().to_owned();
        page.fill(&format!("#{id}"), text);
    };
    fill("0.004");
    let edited = page.report_when("another skull", |report| (shells(report)[skull].2 - 0.004).abs() < 1e-12);
    assert_eq!(edited["head"]["name"], Value::Null);
    assert!(page.exists("input[name=head][value=edited]:checked"));
    assert_ne!(edited["maps"][0]["dipole"]["position_mm"], before["maps"][0]["dipole"]["position_mm"]);
    assert!(!page.text("#head-title").is_empty());
    page.picture("edited-head");
    let none: Vec<String> = Vec::new();
    assert_eq!(page.accessibility_findings(), none, "an edited head");

    fill("-3");
    page.until("a refusal", |page| page.visible("#failure") && page.state() != "busy");
    assert!(page.text("#failure-message").ends_with('.') && page.text("#failure-hint").ends_with('.'));
    assert!(page.visible("#answer"), "the answer stays");
    let details = page.value("return document.querySelector('#failure-details').textContent");
    assert!(details.as_str().unwrap().contains("head-invalid"), "{details}");
    assert_eq!(page.accessibility_findings(), none, "a refused head");

    page.click("#failure-restore");
    let restored = page.report_when("the answer's head", |report| report["maps"] == edited["maps"]);
    assert!(!page.visible("#failure"));
    assert_eq!(shells(&restored), shells(&edited));
    page.click("#head-standard");
    let back = page.report_when("the standard head", |report| report["head"]["name"] == before["head"]["name"]);
    assert_eq!(back["maps"], before["maps"]);

    let radius = number(&before["head"]["radius_mm"]);
    page.fill("#head-radius", "95");
    let larger = page.report_when("a larger head", |report| report["head"]["radius_mm"] == 95.0);
    assert!(radius < 95.0 && larger["head"]["name"] == before["head"]["name"], "its shells are the same");
    page.click("#head-fitted");
    let back = page.report_when("the fitted sphere", |report| report["head"]["radius_mm"] == radius);
    assert_eq!(back["maps"], before["maps"]);
}

/// A decimal comma in an entry is a decimal point, wherever one number can be entered.
fn a_comma_means_what_a_point_does(browser: Browser) {
    let (page, _) = with_head(browser);
    page.value(
        "for (const panel of document.querySelectorAll('details')) panel.open = true;\
         for (const edited of document.querySelectorAll('input[name=head][value=edited]')) edited.click();\
         Worker.prototype.postMessage = () => {}",
    );
    let tried = page.value(
        "const fields = [...document.querySelectorAll('input[inputmode=decimal]')].filter((field) => !/skullRatio|floor/.test(field.id));\
         const outcome = (field, entry) => {\
           field.focus(); field.value = entry;\
           for (const kind of ['input', 'change']) field.dispatchEvent(new Event(kind, { bubbles: true }));\
           field.blur();\
           return [field.getAttribute('aria-invalid') === 'true', field.value.replace(',', '.').replace('\u{2212}', '-')].join();\
         };\
         return fields.map((field) => {\
           const ends = ['0.25', '0.97', '0.9995', '2.5', '40.5'].map((entry) => [outcome(field, entry), outcome(field, entry.replace('.', ','))]);\
           return [field.id || field.name || field.getAttribute('aria-label'), ends.every(([point, comma]) => point === comma), ends.some(([, comma]) => comma.startsWith('false')), ends.join(' ')];\
         })",
    );
    let tried = tried.as_array().unwrap();
    assert!(tried.len() > 20, "{tried:?}");
    for one in tried {
        assert_eq!(one[1], true, "{one}");
    }
    let whole: Vec<&str> = tried.iter().filter(|one| one[2] == false).map(|one| one[0].as_str().unwrap()).collect();
    let counts =
        ["errors-backgroundSources", "errors-draws", "errors-seed", "noise-trials", "sources-draws", "sources-seed"];
    assert_eq!(whole, counts.map(|name| format!("set-{name}")), "only counts refuse all of these");
}

in_both_browsers!(
    a_comma_means_what_a_point_does,
    the_head_is_told,
    published_heads_are_chosen_and_left_again,
    a_head_is_edited_and_taken_back
);
