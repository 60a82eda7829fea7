namespace CycleSim.Charts

open System
open DynamicObj
open Plotly.NET

/// How every chart looks: colours that are told apart by lightness as well as by hue, and lines and markers that are told
/// apart in black and white; axes with units, quiet grid, a note below.
module internal ChartStyle =
    /// Dark to light; ink blue, wine, green, ochre, steel, rose.
    let colours = [| "#12355b"; "#8f2d3c"; "#2f7d5b"; "#c9891a"; "#6d8fb3"; "#d9a0ac" |]
    let ink = "#222222"
    let faint = "#d9d9d9"
    let warning = "#8f2d3c"
    let dashes = [| "solid"; "dash"; "dot"; "dashdot"; "longdash"; "longdashdot" |]
    let symbols = [| "circle"; "square"; "diamond"; "triangle-up"; "triangle-down"; "cross" |]

    /// Light to dark, one hue through the next; ink can be read on all of it.
    let scale = [| "#fdfaf0"; "#f4e6bf"; "#e8cc8b"; "#dbae64"; "#cf9359"; "#c67f62" |]

    /// Light ground of a region, in the order of the colours.
    let tints = [| "#c9d6e4"; "#ecd3d8"; "#cfe6da"; "#f5e3bf"; "#e3eaf1"; "#f7eaed" |]

    /// Fillings of bars, told apart in black and white.
    let fillings = [| ""; "/"; "x"; "."; "-"; "\\"; "|"; "+" |]

    let caution = "Engineering study; not for dispatch, flight or maintenance."

    let of' (items: 'a[]) (index: int) = items[index % items.Length]

    let colour = of' colours
    let dash = of' dashes
    let symbol = of' symbols

    let private put (o: DynamicObj) (name: string) (value: objnull) =
        match value with
        | null -> ()
        | given -> o.SetProperty(name, given)

    let make (fields: (string * objnull) seq) =
        let o = DynamicObj()

        for name, value in fields do
            put o name value

        o

    /// Numbers for a trace: what does not exist leaves a gap.
    let numbers (values: float seq) : objnull =
        values
        |> Seq.map (fun v -> if Double.IsFinite v then box v else null)
        |> Seq.toArray
        |> box

    let trace (kind: string) (fields: (string * objnull) seq) : Trace =
        let t = Trace kind

        for name, value in fields do
            put t name value

        t

    let line colour width dash =
        box (make [ "color", box colour; "width", box width; "dash", box dash ])

    /// A named line with a hover note for each point.
    let series name (x: float seq) (y: float seq) (notes: string seq) (index: int) (fields: (string * objnull) seq) =
        trace "scatter" [
            "name", box name
            "mode", box "lines"
            "x", numbers x
            "y", numbers y
            "text", box (Seq.toArray notes)
            "hovertemplate", box "%{text}<extra></extra>"
            "line", line (colour index) 2.0 (dash index)
            yield! fields
        ]

    /// A thin line without notes.
    let guide name (x: float seq) (y: float seq) lineColour width dashing =
        trace "scatter" [
            "name", box name
            "mode", box "lines"
            "x", numbers x
            "y", numbers y
            "hoverinfo", box "skip"
            "line", line lineColour width dashing
        ]

    /// An entry of the legend without points in the drawing.
    let entry name (symbol: string) colour =
        trace "scatter" [
            "name", box name
            "mode", box "markers"
            "x", numbers [ nan ]
            "y", numbers [ nan ]
            "showlegend", box true
            "marker", box (make [ "size", box 9; "color", box colour; "symbol", box symbol ])
        ]

    /// What has no point, and why: the number of places and the reasons, each once.
    let missing (what: string) (reasons: string seq) =
        let all = Seq.toArray reasons
        let told = all |> Array.filter (fun r -> r <> "") |> Array.distinct

        let more =
            if told.Length > 3 then
                $"; {told.Length - 3} other reasons"
            else
                ""

        let why =
            if told.Length = 0 then
                ""
            else
                " (" + (told |> Seq.truncate 3 |> String.concat "; ") + more + ")"

        if all.Length = 0 then
            ""
        else
            $"{what} left out: {all.Length}{why}."

    let hidden (t: Trace) =
        t.SetProperty("showlegend", false)
        t

    let axis (title: string) (fields: (string * objnull) seq) =
        make [
            "title", box (make [ "text", box title; "standoff", box 10 ])
            "showline", box true
            "linecolor", box ink
            "gridcolor", box faint
            "zeroline", box false
            "ticks", box "outside"
            "exponentformat", box "none"
            "separatethousands", box true
            "automargin", box true
            yield! fields
        ]

    /// A word in the drawing, in the numbers of the axes.
    let label (x: objnull) (y: objnull) (text: string) (fields: (string * objnull) seq) =
        make [
            "x", x
            "y", y
            "text", box text
            "showarrow", box false
            "font", box (make [ "size", box 12; "color", box ink ])
            yield! fields
        ]

    /// Keeps a word readable where lines pass behind it.
    let plate: (string * objnull) seq = [ "bgcolor", box "rgba(255,255,255,0.85)"; "borderpad", box 1 ]

    // Lines that fit under the drawing.
    let private wrapped (text: string) =
        let add (lines: string list) (word: string) =
            match lines with
            | line :: before when line.Length + word.Length < 125 ->
                (if line = "" then word else line + " " + word) :: before
            | _ -> word :: lines

        text.Split([| ' ' |], StringSplitOptions.RemoveEmptyEntries)
        |> Array.fold add [ "" ]
        |> List.rev
        |> String.concat "<br>"

    let note (text: string) =
        label (box 0.0) (box 0.0) (wrapped text) [
            "yshift", box -82
            "xref", box "paper"
            "yref", box "paper"
            "xanchor", box "left"
            "yanchor", box "top"
            "align", box "left"
            "font", box (make [ "size", box 12; "color", box "#555555" ])
        ]

    /// The caution stands first: it is never what runs out of the drawing.
    let cautioned (text: string) = note (caution + " " + text)

    /// Puts traces into one chart with the common look.
    let chart
        title
        (traces: Trace seq)
        xAxis
        yAxis
        (labels: DynamicObj seq)
        (fields: (string * objnull) seq)
        : GenericChart =
        let layout = Layout()

        for name, value in
            [
                "title",
                box (
                    make [
                        "text", box title
                        "x", box 0.01
                        "xanchor", box "left"
                        "font", box (make [ "size", box 17; "color", box ink ])
                    ]
                )
                "font",
                box (
                    make [
                        "family", box "Helvetica, Arial, sans-serif"
                        "size", box 13
                        "color", box ink
                    ]
                )
                "paper_bgcolor", box "white"
                "plot_bgcolor", box "white"
                "height", box 545
                "margin", box (make [ "l", box 80; "r", box 30; "t", box 70; "b", box 135 ])
                "hovermode", box "closest"
                "separators", box ". "
                "hoverlabel", box (make [ "bgcolor", box "white"; "font", box (make [ "size", box 13 ]) ])
                "legend",
                box (
                    make [
                        "bgcolor", box "rgba(255,255,255,0.8)"
                        "tracegroupgap", box 0
                        "traceorder", box "normal"
                    ]
                )
                "xaxis", box xAxis
                "yaxis", box yAxis
                "annotations", box (Seq.toArray labels)
                yield! fields
            ] do
            put layout name value

        let config = Config()
        config.SetProperty("responsive", true)
        config.SetProperty("displaylogo", false)

        traces
        |> Seq.map (GenericChart.ofTraceObject false)
        |> GenericChart.combine
        |> GenericChart.setLayout layout
        |> GenericChart.setConfig config
