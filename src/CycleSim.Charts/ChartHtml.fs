namespace CycleSim.Charts

open System.IO
open System.Threading
open Newtonsoft.Json
open Plotly.NET

/// Charts in a page that is read with no network: the drawing library once, then each chart.
[<AbstractClass; Sealed>]
type ChartHtml private () =
    static let source =
        lazy
            (let assembly = typeof<GenericChart>.Assembly

             let name = assembly.GetManifestResourceNames() |> Array.find _.EndsWith(".min.js")

             match assembly.GetManifestResourceStream name with
             | null -> invalidOp "Plotly.NET carries no drawing library"
             | stream ->
                 use reader = new StreamReader(stream)
                 reader.ReadToEnd())

    static let mutable count = 0

    // A "</script>" inside a text would end the script.
    static member private InScript(json: string) = json.Replace("</", "<\\/")

    /// The drawing library, about 3.6 MB of script, without its element.
    static member Library: string = source.Value

    /// The library as a script element, to stand once ahead of the first chart.
    static member LibraryElement: string =
        "<script>" + ChartHtml.InScript source.Value + "</script>"

    /// <summary>
    /// A chart as an element with its script, which waits for the library: a notebook may put its outputs on the page in any
    /// order.
    /// </summary>
    /// <param name="id">identifier of the element, unlike any other of the page</param>
    static member Fragment(chart: GenericChart, id: string) : string =
        let figure = ChartHtml.InScript(GenericChart.toFigureJson chart)

        let config =
            ChartHtml.InScript(JsonConvert.SerializeObject(GenericChart.getConfig chart))

        $"<div class=\"cyclesim-chart\" id=\"{id}\"></div><script>(function draw(){{"
        + $"if(!window.Plotly){{setTimeout(draw,50);return;}}var figure={figure};"
        + $"Plotly.newPlot(\"{id}\",figure.data,figure.layout,{config});}})();</script>"

    /// A chart with an identifier of its own.
    static member Fragment(chart: GenericChart) : string =
        ChartHtml.Fragment(chart, $"cyclesim-chart-{Interlocked.Increment &count}")
