//! Draws every page at the four sizes, light and dark, as PNG, without a display.
//!
//! Pages named `office…` are filled from the demonstration; the others show the screens' own preview content.
//!
//! `pictures <folder> [words…]`: with words, only pages whose name holds one of them.

use bubblepoint::app::{Appearance as Light, Look};
use bubblepoint_ui::Appearance;
use bubblepoint_ui_tests::{OFFICE_PAGES, PHONE, SIZES, demonstration, draw, mark_demonstration, office_as, open, save, scenes, settle};
use std::path::PathBuf;
use std::process::ExitCode;

fn main() -> ExitCode {
    let mut words = std::env::args().skip(1);
    let Some(folder) = words.next().map(PathBuf::from) else {
        eprintln!("say where to: pictures <folder> [words…]");
        return ExitCode::from(2);
    };
    let only: Vec<String> = words.collect();
    if let Err(error) = std::fs::create_dir_all(&folder) {
        eprintln!("the folder {} cannot be made: {error}", folder.display());
        return ExitCode::FAILURE;
    }
    let mut drawn = 0;
    for scene in scenes().filter(|s| only.is_empty() || only.iter().any(|w| s.name.contains(w.as_str()))) {
        for size in SIZES {
            let mut looks = vec![("light", Appearance::Light, 1.0), ("dark", Appearance::Dark, 1.0)];
            if size == PHONE {
                looks.push(("sunlight", Appearance::Sunlight, 1.0));
                looks.push(("large", Appearance::Light, 1.5));
            }
            for (look, appearance, text_factor) in looks {
                let window = open(size, appearance, text_factor);
                (scene.set)(&window);
                settle();
                let path = folder.join(format!("{}-{}-{look}.png", scene.name, size.name));
                if let Err(error) = save(&draw(&window), &path) {
                    eprintln!("{} cannot be written: {error}", path.display());
                    return ExitCode::FAILURE;
                }
                drawn += 1;
            }
        }
    }
    let documents = folder.join("documents");
    let pages = OFFICE_PAGES.iter().filter(|page| only.is_empty() || only.iter().any(|w| page.name.contains(w.as_str())));
    let app = demonstration();
    for page in pages {
        for size in SIZES {
            let mut looks = vec![("light", Light::Light, 100), ("dark", Light::Dark, 100)];
            if size == PHONE {
                looks.push(("sunlight", Light::Sunlight, 100));
                looks.push(("large", Light::Light, 150));
            }
            for (look, appearance, text_size) in looks {
                let opened = office_as(&app, size, Look { appearance, text_size }, &documents);
                mark_demonstration(&opened.window);
                (page.reach)(&opened);
                settle();
                let path = folder.join(format!("{}-{}-{look}.png", page.name, size.name));
                if let Err(error) = save(&draw(&opened.window), &path) {
                    eprintln!("{} cannot be written: {error}", path.display());
                    return ExitCode::FAILURE;
                }
                drawn += 1;
            }
        }
    }
    println!("{drawn} pictures in {}", folder.display());
    if drawn == 0 { ExitCode::FAILURE } else { ExitCode::SUCCESS }
}
