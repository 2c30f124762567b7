use std::time::Instant;
use undulift_design::*;
fn main() {
    let dir = std::env::temp_dir().join("ud_stress");
    std::fs::create_dir_all(&dir).unwrap();
    let full = std::fs::read_to_string("tests/full.toml").unwrap();
    std::fs::write(dir.join("my-rib.csv"), std::fs::read("tests/my-rib.csv").unwrap()).unwrap();
    let go = |name: &str, text: String, sets: &[&str]| {
        let p = dir.join("d.toml");
        std::fs::write(&p, &text).unwrap();
        let o: Vec<_> = sets.iter().map(|s| Override::parse(s).unwrap()).collect();
        let t = Instant::now();
        let r = read(&p, &o);
        let told = match &r {
            Ok(_) => "ok".into(),
            Err(e) => format!("{e} | {}", e.lines().next().unwrap()),
        };
        println!("{name}: {:?} {}", t.elapsed(), &told.chars().take(230).collect::<String>());
    };
    go("full", full.clone(), &[]);
    go("full", full.clone(), &[]);
    go("full set", full.clone(), &["gait.frequency_hz=1", "body.width_m.middle=0.2"]);
    go("unknown", (0..1_000_000).map(|k| format!("key{k}=1\n")).collect(), &[]);
    go("unknown set", (0..1_000_000).map(|k| format!("key{k}=1\n")).collect(), &["a=1"]);
    go("list", format!("[launch]\nspin_deg_s=[{}]\n", "1,".repeat(7_000_000)), &[]);
    go("one line", format!("[launch]\nspin_deg_s=[{}]\n", "\"\",".repeat(5_000_000)), &[]);
    go("payload", "[[payload]]\n".repeat(1_300_000), &[]);
    go("servos", (0..900_000).map(|k| format!("[servo.s{k}]\n")).collect(), &[]);
    go("deep", format!("a={}1{}", "[".repeat(100_000), "]".repeat(100_000)), &[]);
    go("deep key", format!("a{}=1", ".a".repeat(100_000)), &[]);
    go("deep inline", format!("a={}1{}", "{a=".repeat(100_000), "}".repeat(100_000)), &[]);
    for (n, csv) in [
        ("rows", "reynolds,alpha_deg,cl,cd\n".to_owned() + &"1,2,x,4\n".repeat(8_000_000)),
        ("same", "reynolds,alpha_deg,cl,cd\n".to_owned() + &"1,2,3,4\n".repeat(8_000_000)),
        (
            "re",
            "reynolds,alpha_deg,cl,cd\n".to_owned()
                + &(0..3_000_000).map(|k| format!("{k}.5,2,3,4\n")).collect::<String>(),
        ),
        ("commas", ",".repeat(60_000_000)),
        ("quote", "\"".repeat(60_000_001)),
        ("blank", "\n".repeat(60_000_000)),
    ] {
        std::fs::write(dir.join("my-rib.csv"), csv).unwrap();
        go(n, full.clone(), &[]);
    }
}
