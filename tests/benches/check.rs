//! How long the main job takes: the whole check of a JATS article and of a Word file, and the scan
//! for statements alone, in bytes of text per second.
//!
//! `TIEOUT_CORPUS=FOLDER cargo bench` also times all files of a folder, one after the other on one
//! thread, and beside them `xmllint --noout` on the same files if it is installed.

use criterion::{Criterion, Throughput, criterion_group, criterion_main};
use std::hint::black_box;
use std::path::{Path, PathBuf};
use std::process::Command;
use tieout::judge::Options;
use tieout::manuscript::{BlockKind, Builder, Format};
use tieout::statements::{self, Grammar};

fn check(path: &Path) -> usize {
    let manuscript = tieout::readers::read_file(path).expect("the file can be read");
    tieout::examine(manuscript, Grammar::built_in(), &Options::default())
        .findings
        .len()
}

fn whole_check(c: &mut Criterion) {
    let mut group = c.benchmark_group("whole check");
    for name in ["watering.xml", "watering.docx", "watering.pdf"] {
        let path = PathBuf::from("fixtures/demo").join(name);
        let size = std::fs::metadata(&path)
            .expect("the demo is part of the repository")
            .len();
        group.throughput(Throughput::Bytes(size));
        group.bench_function(name, |b| b.iter(|| check(black_box(&path))));
    }
    group.finish();
}

fn text_scan(c: &mut Criterion) {
    // The demo's paragraphs between paragraphs without results, about as in an article.
    let demo =
        std::fs::read_to_string("fixtures/demo/watering.txt").expect("the demo is part of the repository");
    let filler =
        "The gardeners of the upper site carry their water from the brook, and nobody has counted the cans. "
            .repeat(8);
    let mut builder = Builder::new(Format::Text);
    for paragraph in demo.split("\n\n").cycle().take(400) {
        builder.open(BlockKind::Paragraph);
        builder.text(paragraph);
        for _ in 0..3 {
            builder.open(BlockKind::Paragraph);
            builder.text(&filler);
        }
    }
    let manuscript = builder.finish();
    let grammar = Grammar::built_in();
    let mut group = c.benchmark_group("text scan");
    group.throughput(Throughput::Bytes(manuscript.text.len() as u64));
    group.bench_function("demo among prose", |b| {
        b.iter(|| statements::find(black_box(&manuscript), grammar, 0.05).len());
    });
    group.finish();
}

fn corpus(c: &mut Criterion) {
    let Some(folder) = std::env::var_os("TIEOUT_CORPUS") else {
        return;
    };
    let mut files: Vec<PathBuf> = std::fs::read_dir(folder)
        .expect("TIEOUT_CORPUS is a folder")
        .filter_map(|f| Some(f.ok()?.path()))
        .filter(|f| f.extension().is_some_and(|e| e == "xml" || e == "nxml"))
        .collect();
    files.sort();
    let size = files
        .iter()
        .filter_map(|f| std::fs::metadata(f).ok())
        .map(|m| m.len())
        .sum();
    let mut group = c.benchmark_group("corpus");
    group.sample_size(10).throughput(Throughput::Bytes(size));
    group.bench_function("whole check, one thread", |b| {
        b.iter(|| files.iter().map(|f| check(f)).sum::<usize>())
    });
    if Command::new("xmllint").arg("--version").output().is_ok() {
        group.bench_function("xmllint --noout", |b| {
            b.iter(|| {
                Command::new("xmllint")
                    .arg("--noout")
                    .args(&files)
                    .status()
                    .expect("xmllint runs")
            });
        });
    }
    group.finish();
}

criterion_group!(benches, whole_check, text_scan, corpus);
criterion_main!(benches);
