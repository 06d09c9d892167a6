#!/usr/bin/env bash
# Prints JATS articles in two columns by several programs into fixtures/corpus/printed, with the text
# of their source beside them: what order a reading should have is then known.
#
#   tests/corpus/print.sh FOLDER      a folder of articles, e.g. starter_corpus of the sdist allofplos
#
# Needs pandoc, pdflatex with the classes named below (those that are missing are passed over),
# soffice, chromium, and python3 with the module typst and a pandoc of version 3 or newer for Typst
# (PANDOC3=…). Figures are left out; tables stay as floats where LaTeX prints.
set -euo pipefail
articles=$(realpath "$1")
cd "$(dirname "$0")/../.."
into=$PWD/fixtures/corpus/printed
mkdir -p "$into"
pandoc3=${PANDOC3:-pandoc}
work=$(mktemp -d)
trap 'rm -r "$work"' EXIT

cat >"$work/plain.lua" <<'LUA'
-- What every program can print: no figures, no notes, no links, no formulas.
function Image() return {} end
function Figure() return {} end
function Link(l) return l.content end
function Span(s) return s.content end
function Cite(c) return c.content end
function Note() return {} end
function Math() return {} end
function RawInline() return {} end
function RawBlock() return {} end
function Div(d) return d.content end
function Para(p) if #p.content == 0 then return {} end end
function Header(h) h.attr = pandoc.Attr(); return h end
if FORMAT ~= 'latex' then function Table() return {} end end
LUA
cat >"$work/floats.lua" <<'LUA'
-- Tables become floats: of one column, or as wide as the page when they have many cells in a row.
local function latex(blocks) return (pandoc.write(pandoc.Pandoc(blocks), 'latex'):gsub('%s*\n%s*', ' ')) end
function Table(t)
  local wide = #t.colspecs > 4
  local float = wide and 'table*' or 'table'
  local out = {'\\begin{' .. float .. '}\\caption{' .. latex(t.caption.long) .. '}\\footnotesize\\begin{tabular}{'
    .. string.rep('p{' .. string.format('%.3f', 0.8 / #t.colspecs) .. '\\linewidth}', #t.colspecs) .. '}\\hline'}
  local function add(rows)
    for _, row in ipairs(rows) do
      local cells = {}
      for _, cell in ipairs(row.cells or row[2]) do table.insert(cells, latex(cell.contents or cell[5])) end
      if #cells <= #t.colspecs then table.insert(out, table.concat(cells, ' & ') .. '\\\\') end
    end
  end
  add(t.head.rows or t.head[2])
  table.insert(out, '\\hline')
  for _, body in ipairs(t.bodies) do add(body.body) end
  table.insert(out, '\\hline\\end{tabular}\\end{' .. float .. '}')
  return pandoc.RawBlock('latex', table.concat(out, '\n'))
end
LUA
cat >"$work/characters.tex" <<'TEX'
\usepackage[T1]{fontenc}\usepackage{textcomp,amsmath,amssymb,newunicodechar}
\newunicodechar{−}{\ensuremath{-}}\newunicodechar{×}{\ensuremath{\times}}\newunicodechar{±}{\ensuremath{\pm}}
\newunicodechar{≤}{\ensuremath{\le}}\newunicodechar{≥}{\ensuremath{\ge}}\newunicodechar{≈}{\ensuremath{\approx}}
\newunicodechar{α}{\ensuremath{\alpha}}\newunicodechar{β}{\ensuremath{\beta}}\newunicodechar{γ}{\ensuremath{\gamma}}
\newunicodechar{δ}{\ensuremath{\delta}}\newunicodechar{κ}{\ensuremath{\kappa}}\newunicodechar{λ}{\ensuremath{\lambda}}
\newunicodechar{μ}{\ensuremath{\mu}}\newunicodechar{σ}{\ensuremath{\sigma}}\newunicodechar{τ}{\ensuremath{\tau}}
\newunicodechar{χ}{\ensuremath{\chi}}\newunicodechar{η}{\ensuremath{\eta}}\newunicodechar{θ}{\ensuremath{\theta}}
\newunicodechar{Δ}{\ensuremath{\Delta}}\newunicodechar{∼}{\ensuremath{\sim}}\newunicodechar{→}{\ensuremath{\to}}
\newunicodechar{ρ}{\ensuremath{\rho}}\newunicodechar{ε}{\ensuremath{\varepsilon}}\newunicodechar{ω}{\ensuremath{\omega}}
TEX
printf '<style>body { max-width: none; columns: 2; font: 10pt serif; hyphens: auto; text-align: justify }</style>' \
    >"$work/columns.html"

printf '$abstract$\n' >"$work/abstract.latex"
printf '\\title{$title$}\n' >"$work/title.latex"
printf '$title$\n\n$abstract$\n' >"$work/front.plain"

latex() { # json, name, class, options
    kpsewhich "$3.cls" >/dev/null || return 1
    local abstract
    abstract=$(pandoc "$1" -t latex --template "$work/abstract.latex" 2>/dev/null)
    {
        printf '\\documentclass[%s]{%s}\n' "$4" "$3"
        cat "$work/characters.tex"
        printf '\\usepackage[normalem]{ulem}\\providecommand{\\tightlist}{}\n'
        printf '\\providecommand{\\textsubscript}[1]{$_{\\text{#1}}$}\n\\sloppy\\begin{document}\n'
        pandoc "$1" -t latex --lua-filter "$work/floats.lua" --template "$work/title.latex" --wrap=none
        printf '\\author{A Gardener}\n'
        case $3 in
            article | extarticle) printf '\\twocolumn[\\maketitle\\begin{quote}%s\\end{quote}]\n' "$abstract" ;;
            revtex4-2) printf '\\begin{abstract}%s\\end{abstract}\\maketitle\n' "$abstract" ;;
            *) printf '\\maketitle\\begin{abstract}%s\\end{abstract}\n' "$abstract" ;;
        esac
        pandoc "$1" -t latex --lua-filter "$work/floats.lua" --wrap=none
        printf '\\end{document}\n'
    } >"$work/$2.tex"
    (cd "$work" && timeout 300 pdflatex -interaction=batchmode "$2.tex" >/dev/null 2>&1 || true)
    [ -s "$work/$2.pdf" ] && mv "$work/$2.pdf" "$into/$2.pdf"
}

typst() { # json, name; the two versions of pandoc don't read each other's JSON
    "$pandoc3" -f jats "$article" -t typst -s -V columns=2 --lua-filter "$work/plain.lua" -o "$work/$2.typ" \
        2>/dev/null &&
        python3 -c 'import sys, typst; typst.compile(sys.argv[1], output=sys.argv[2])' "$work/$2.typ" "$into/$2.pdf"
}

chromium_() { # json, name
    pandoc "$1" -t html5 -s -H "$work/columns.html" -o "$work/$2.html" &&
        chromium --headless --no-sandbox --disable-gpu --no-pdf-header-footer \
            --print-to-pdf="$into/$2.pdf" "$work/$2.html" 2>/dev/null
}

libreoffice() { # json, name
    pandoc "$1" -o "$work/$2-one.docx"
    mkdir "$work/docx"
    (
        cd "$work/docx"
        unzip -q "../$2-one.docx"
        sed -i 's#<w:sectPr */>#<w:sectPr></w:sectPr>#; s#</w:sectPr>#<w:cols w:num="2" w:space="500"/></w:sectPr>#' \
            word/document.xml
        zip -q -r "../$2.docx" .
    )
    rm -r "$work/docx"
    soffice --headless --convert-to pdf --outdir "$into" "$work/$2.docx" >/dev/null
}

number=0
for article in "$articles"/*.xml; do
    bytes=$(stat -c %s "$article")
    if [ "$bytes" -lt 60000 ] || [ "$bytes" -gt 170000 ]; then continue; fi
    [ "$number" -lt "${MOST:-40}" ] || break
    number=$((number + 1))
    json=$work/article.json
    pandoc -f jats "$article" -t json --lua-filter "$work/plain.lua" -o "$json" 2>/dev/null || continue
    # For LaTeX the tables stay.
    tables=$work/tables.json
    sed "s/^if FORMAT.*//" "$work/plain.lua" >"$work/tables.lua"
    pandoc -f jats "$article" -t json --lua-filter "$work/tables.lua" -o "$tables" 2>/dev/null || continue
    case $((number % 10)) in
        0) name=$number-article made=latex class=article options=twocolumn,10pt ;;
        1) name=$number-ieeetran made=latex class=IEEEtran options=journal ;;
        2) name=$number-revtex made=latex class=revtex4-2 options=twocolumn ;;
        3) name=$number-typst made=typst ;;
        4) name=$number-chromium made=chromium_ ;;
        5) name=$number-article made=latex class=article options=twocolumn,a4paper ;;
        6) name=$number-elsarticle made=latex class=elsarticle options=5p,twocolumn ;;
        7) name=$number-libreoffice made=libreoffice ;;
        8) name=$number-typst made=typst ;;
        9) name=$number-ieeeconf made=latex class=IEEEtran options=conference ;;
    esac
    from=$json
    [ "$made" = latex ] && from=$tables
    if "$made" "$from" "$name" "${class:-}" "${options:-}"; then
        {
            pandoc "$from" -t plain --wrap=none --template "$work/front.plain"
            pandoc "$from" -t plain --wrap=none
        } >"$into/$name.txt"
        echo "$name"
    else
        echo "not printed: $name" >&2
    fi
done
