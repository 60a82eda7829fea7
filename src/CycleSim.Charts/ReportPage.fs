namespace CycleSim.Charts

open System
open System.Net
open System.Text
open Plotly.NET

/// The pieces of a page that is read with no network and prints well.
type internal ReportPage(title: string) =
    let body = StringBuilder()
    let contents = StringBuilder()
    let mutable sections = 0
    let mutable charts = 0

    let escaped (text: string) = WebUtility.HtmlEncode text

    let add (html: string) =
        body.Append(html).Append('\n') |> ignore

    static let style =
        """
:root{color-scheme:light}
body{font:15px/1.5 Helvetica,Arial,sans-serif;color:#222;background:#fff;max-width:1060px;margin:2em auto;padding:0 1.5em}
h1{font-size:1.7em;margin:0 0 .2em}h2{font-size:1.3em;margin:2em 0 .4em;border-bottom:1px solid #999;padding-bottom:.15em}
h3{font-size:1.05em;margin:1.4em 0 .3em}
.caution{border-left:5px solid #8f2d3c;padding:.5em 1em;background:#faf3f4;margin:1em 0}
nav ol{columns:2;margin:.3em 0 1em}a{color:#12355b}
table{border-collapse:collapse;margin:.5em 0 1em;font-size:.92em}
caption{text-align:left;font-weight:bold;padding:.2em 0}
th{font-weight:normal;color:#555;border-bottom:1px solid #999;vertical-align:bottom}
th,td{padding:.15em .9em .15em 0;text-align:right;white-space:nowrap}
th.t,td.t{text-align:left}
tbody tr:nth-child(5n){border-bottom:1px solid #e3e3e3}
pre{font-size:.82em;line-height:1.35;background:#f7f7f7;padding:1em;overflow-x:auto}
small,.note{color:#555}
@page{size:A4;margin:14mm}
@media print{body{margin:0;max-width:none;font-size:10pt}h2,h3{break-after:avoid}.cyclesim-chart{break-inside:avoid;zoom:.7}
tr{break-inside:avoid}thead{display:table-header-group}pre{white-space:pre-wrap}.modebar{display:none}}
"""

    // On paper every chart has the width that its words were set for; the style sheet scales it to the sheet.
    static let forPrint =
        "(function(){function all(size){document.querySelectorAll('.cyclesim-chart').forEach(function(e){"
        + "Plotly.relayout(e,size)})}"
        + "window.addEventListener('beforeprint',function(){all({autosize:false,width:960})});"
        + "window.addEventListener('afterprint',function(){all({autosize:true,width:null})})})();"

    member _.Section(name: string) =
        sections <- sections + 1

        contents.Append($"<li><a href=\"#s{sections}\">{escaped name}</a></li>")
        |> ignore

        add $"<h2 id=\"s{sections}\">{escaped name}</h2>"

    member _.Heading(name: string) = add $"<h3>{escaped name}</h3>"

    member _.Words(text: string) = add $"<p>{escaped text}</p>"

    member _.Note(text: string) =
        add $"<p class=\"note\">{escaped text}</p>"

    member _.Caution(text: string) =
        add $"<p class=\"caution\">{escaped text}</p>"

    member _.Text(text: string) = add $"<pre>{escaped text}</pre>"

    /// A table whose first `texts` columns are words, the others numbers.
    member _.Table(caption: string, texts: int, head: string list, rows: string list seq) =
        let cell tag k text =
            let kind = if k < texts then " class=\"t\"" else ""
            $"<{tag}{kind}>{escaped text}</{tag}>"

        let line tag cells =
            "<tr>" + (cells |> List.mapi (cell tag) |> String.concat "") + "</tr>"

        let heading =
            if caption = "" then
                ""
            else
                $"<caption>{escaped caption}</caption>"

        let lines = rows |> Seq.map (line "td") |> String.concat ""
        let first = line "th" head
        add $"<table>{heading}<thead>{first}</thead><tbody>{lines}</tbody></table>"

    /// Names with their values.
    member _.Facts(facts: (string * string) list) =
        let lines =
            facts
            |> List.map (fun (name, value) ->
                $"<tr><td class=\"t\">{escaped name}</td><td class=\"t\">{escaped value}</td></tr>")
            |> String.concat ""

        add $"<table><tbody>{lines}</tbody></table>"

    member _.Chart(chart: GenericChart) =
        charts <- charts + 1
        add (ChartHtml.Fragment(chart, $"chart-{charts}"))

    /// What can be shown, or why it cannot.
    member page.Attempt(act: unit -> unit) =
        let before = body.Length

        try
            act ()
        with
        | :? CycleSim.Reports.NoSolutionException
        | :? CycleSim.Matching.RatingException
        | :? ArgumentException as none ->
            body.Length <- before
            page.Note $"Not shown: {none.Message}"

    member _.Html: string =
        "<!doctype html>\n<html lang=\"en\"><head><meta charset=\"utf-8\">"
        + "<meta name=\"viewport\" content=\"width=device-width\">"
        + $"<title>{escaped title}</title><style>{style}</style>{ChartHtml.LibraryElement}</head>\n<body>\n"
        + body.ToString().Replace("<!--contents-->", $"<nav><ol>{contents}</ol></nav>")
        + $"<script>{forPrint}</script></body></html>\n"

    member _.Opening(name: string, description: string) =
        add $"<h1>{escaped name}</h1><p>{escaped description}</p>"

    member _.Contents() = add "<!--contents-->"
