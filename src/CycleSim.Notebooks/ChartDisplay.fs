namespace CycleSim.Notebooks

open System
open System.IO
open System.Security.Cryptography
open System.Text
open System.Threading
open Newtonsoft.Json
open Plotly.NET

/// Charts drawn with no network. The drawing library, which Plotly.NET carries, is written into a notebook once; a chart
/// waits for it, in whatever order a saved notebook is put on the screen.
module internal ChartDisplay =
    let private count = ref 0

    // In JSON "<" can only stand inside a string; as it is it could end the script.
    let private inScript (json: string) = json.Replace("<", "\\u003c")

    /// The drawing library as a piece of HTML, 3.6 MB.
    let library () =
        let assembly = typeof<GenericChart>.Assembly
        let name = assembly.GetManifestResourceNames() |> Array.find (_.EndsWith(".min.js"))

        match assembly.GetManifestResourceStream name with
        | null -> raise (FileNotFoundException $"{assembly.GetName().Name} does not hold {name}.")
        | stream ->
            use reader = new StreamReader(stream, Encoding.UTF8)
            // A page with a module loader would hand the library to it instead of making it known to the charts.
            "<script>(function(){var define=undefined,module=undefined,exports=undefined;\n"
            + reader.ReadToEnd()
            + "\n}).call(window)</script>"
            + "<small>Charts are drawn by plotly.js, kept in this notebook; nothing is fetched.</small>"

    let html (chart: GenericChart) =
        let figure = inScript (GenericChart.toFigureJson chart)
        let config = inScript (JsonConvert.SerializeObject(GenericChart.getConfig chart))

        let hash =
            Convert.ToHexStringLower(SHA256.HashData(Encoding.UTF8.GetBytes figure))[..11]

        let id = $"chart-{hash}-{Interlocked.Increment count}"

        $"<div class=\"cyclesim-chart\" id=\"{id}\"></div><script>(function draw(){{"
        + "if(!window.Plotly){setTimeout(draw,100);return;}"
        + $"var figure={figure};Plotly.newPlot(\"{id}\",figure.data,figure.layout,{config});}})()</script>"

    /// Names of the curves; a chart has no other words.
    let text (chart: GenericChart) =
        let names =
            GenericChart.getTraces chart
            |> List.mapi (fun i trace ->
                match trace.TryGetTypedPropertyValue<string> "name" with
                | Some name -> name
                | None -> $"curve {i + 1}")

        "chart: " + String.concat ", " names
