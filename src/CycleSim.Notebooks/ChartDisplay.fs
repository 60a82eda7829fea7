namespace CycleSim.Notebooks

open System
open System.Security.Cryptography
open System.Text
open System.Threading
open CycleSim.Charts
open Plotly.NET

/// Charts in a notebook: the drawing library is written into it once, and charts fetch nothing.
module internal ChartDisplay =
    let private count = ref 0

    /// The drawing library as a piece of HTML, 3.6 MB.
    let library () =
        // A page with a module loader would hand the library to it instead of making it known to the charts.
        "<script>(function(){var define=undefined,module=undefined,exports=undefined;\n"
        + ChartHtml.Library.Replace("</", "<\\/")
        + "\n}).call(window)</script>"
        + "<small>Charts are drawn by plotly.js, kept in this notebook; nothing is fetched.</small>"

    let html (chart: GenericChart) =
        let figure = Encoding.UTF8.GetBytes(GenericChart.toFigureJson chart)
        let hash = Convert.ToHexStringLower(SHA256.HashData figure)[..11]
        // A count alone would come again after a restart of the kernel, while the outputs of before still stand.
        ChartHtml.Fragment(chart, $"chart-{hash}-{Interlocked.Increment count}")

    /// Names of the curves; a chart has no other words.
    let text (chart: GenericChart) =
        let names =
            GenericChart.getTraces chart
            |> List.mapi (fun i trace ->
                match trace.TryGetTypedPropertyValue<string> "name" with
                | Some name -> name
                | None -> $"curve {i + 1}")

        "chart: " + String.concat ", " names
