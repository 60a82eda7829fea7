namespace CycleSim.Notebooks

open System.Net
open System.Text

/// Writes a sheet as HTML that stands alone: no script, nothing fetched, every text escaped.
module internal SheetHtml =
    let private escaped (text: string) = WebUtility.HtmlEncode text

    let private cell tag side rule text =
        $"<{tag} style=\"padding:0.1em 0.8em 0.1em 0;white-space:nowrap;text-align:{side}{rule}\">{escaped text}</{tag}>"

    let private row tag rule sides cells =
        let written = List.map2 (fun side text -> cell tag side rule text) sides cells
        "<tr>" + String.concat "" written + "</tr>"

    let private table head rows =
        "<table style=\"border-collapse:collapse;margin:0.3em 0 0.6em 0\">"
        + head
        + "<tbody>"
        + String.concat "" rows
        + "</tbody></table>"

    let private grid (grid: Grid) =
        let sides =
            grid.Columns
            |> List.mapi (fun i _ -> if i < grid.TextColumns then "left" else "right")

        let head = row "th" ";border-bottom:1px solid #999" sides grid.Columns
        table $"<thead>{head}</thead>" (grid.Rows |> List.map (row "td" "" sides))

    let private part =
        function
        | Facts facts -> table "" [ for name, value in facts -> row "td" "" [ "left"; "left" ] [ name; value ] ]
        | Grid g when g.Title = "" -> grid g
        | Grid g -> $"<div>{escaped g.Title}</div>{grid g}"
        | FoldedGrid g -> $"<details><summary>{escaped g.Title}</summary>{grid g}</details>"
        | Remark text -> $"<p><small>{escaped text}</small></p>"

    let write (sheet: Sheet) =
        let parts = sheet.Parts |> List.map part |> String.concat ""
        $"<div class=\"cyclesim\" style=\"overflow-x:auto\"><p><strong>{escaped sheet.Title}</strong></p>{parts}</div>"

/// Writes a sheet as plain text in aligned columns.
module internal SheetText =
    let private aligned textColumns (rows: string list list) =
        let widths =
            match rows with
            | [] -> []
            | first :: _ ->
                first
                |> List.mapi (fun i _ -> rows |> Seq.map (fun row -> row[i].Length) |> Seq.max)

        let padded i (text: string, width: int) =
            if i < textColumns then
                text.PadRight width
            else
                text.PadLeft width

        [
            for row in rows -> (List.zip row widths |> List.mapi padded |> String.concat "  ").TrimEnd()
        ]

    let private part =
        function
        | Facts facts -> aligned 2 [ for name, value in facts -> [ name; value ] ]
        | Grid g when g.Title = "" -> aligned g.TextColumns (g.Columns :: g.Rows)
        | Grid g
        | FoldedGrid g -> g.Title :: aligned g.TextColumns (g.Columns :: g.Rows)
        | Remark text -> [ text ]

    let write (sheet: Sheet) =
        let text = StringBuilder(sheet.Title)

        for lines in sheet.Parts |> List.map part do
            text.Append('\n') |> ignore

            for line in lines do
                text.Append('\n').Append(line) |> ignore

        text.ToString()
