namespace CycleSim.Notebooks

open System
open System.Reflection
open System.Runtime.CompilerServices
open CycleSim.Definitions
open CycleSim.Engine
open CycleSim.Matching
open CycleSim.Reports
open CycleSim.Studies
open Microsoft.DotNet.Interactive
open Microsoft.DotNet.Interactive.Formatting
open Plotly.NET

/// Shows results in notebooks: tables with units, and charts that need no network.
[<AbstractClass; Sealed>]
type NotebookDisplay private () =
    // Plotly.NET asks for a newer FSharp.Core than the kernel has loaded, and runs with the kernel's.
    static let oneFSharpCore =
        ResolveEventHandler(fun _ request ->
            if AssemblyName(request.Name).Name = "FSharp.Core" then
                typeof<unit>.Assembly
            else
                null)

    static member private Show<'T>(html: 'T -> string, text: 'T -> string) =
        Formatter.Register<'T>(Func<'T, string> html, HtmlFormatter.MimeType)
        Formatter.Register<'T>(Func<'T, string> text, PlainTextFormatter.MimeType)
        Formatter.SetPreferredMimeTypesFor(typeof<'T>, HtmlFormatter.MimeType, PlainTextFormatter.MimeType)

    static member private Show<'T>(sheet: 'T -> Sheet) =
        NotebookDisplay.Show<'T>(sheet >> SheetHtml.write, sheet >> SheetText.write)

    static member private ShowTable<'T>(table: 'T -> StudyTable) =
        NotebookDisplay.Show<'T>(table >> StudySheets.ofTable)

    /// Call it in the first cell, in C# or F#: registers how results are shown, as HTML and as plain text, and puts the
    /// drawing library of the charts into this cell's output. Outside a notebook it only registers.
    static member Register() =
        AppDomain.CurrentDomain.remove_AssemblyResolve oneFSharpCore
        AppDomain.CurrentDomain.add_AssemblyResolve oneFSharpCore
        NotebookDisplay.RegisterAll()

    // Apart, since Plotly.NET must not be looked for before that.
    [<MethodImpl(MethodImplOptions.NoInlining)>]
    static member private RegisterAll() =
        NotebookDisplay.Show<EngineDefinition> EngineSheets.ofDefinition
        NotebookDisplay.Show<LoadedDefinition> EngineSheets.ofLoaded
        NotebookDisplay.Show<EngineModel> EngineSheets.ofModel
        NotebookDisplay.Show<OperatingPoint> PointSheets.ofPoint
        NotebookDisplay.Show<StationReport seq> PointSheets.ofStations
        NotebookDisplay.Show<CompressorReport seq> PointSheets.ofCompressors
        NotebookDisplay.Show<StreamReport seq> PointSheets.ofAir
        NotebookDisplay.Show<LimitMargin seq> PointSheets.ofMargins
        NotebookDisplay.Show<Rating> StudySheets.ofRating
        NotebookDisplay.Show<FlatRatingResult> StudySheets.ofFlatRating
        NotebookDisplay.Show<SurgeSurveyResult> StudySheets.ofSurgeSurvey
        NotebookDisplay.Show<RequiredRating> StudySheets.ofRequiredRating
        NotebookDisplay.Show<BreakEffect seq> StudySheets.ofBreakEffects
        NotebookDisplay.Show<PenaltiesResult> StudySheets.ofPenalties
        NotebookDisplay.ShowTable<RatingMap> _.Table([||])
        NotebookDisplay.ShowTable<ManoeuvreResult> _.Table([||])
        NotebookDisplay.ShowTable<PowerTablesResult> _.Table([||])
        NotebookDisplay.ShowTable<TakeOffRunResult> _.Table([||])
        NotebookDisplay.ShowTable<PerformanceTable> _.Table([||])
        NotebookDisplay.ShowTable<ReducedThrustResult> _.Table([||])
        NotebookDisplay.ShowTable<ThrottleLoop> _.Table([||])
        NotebookDisplay.ShowTable<BestAltitude> _.Table([||])
        NotebookDisplay.ShowTable<EgtMarginResult> _.Table([||])
        NotebookDisplay.ShowTable<DiagnosisResult> _.Table([||])
        NotebookDisplay.ShowTable<UncertaintyResult> _.Table([||])
        NotebookDisplay.ShowTable<SweepResult> _.Table([||])
        NotebookDisplay.Show<SweepSummary> StudySheets.ofSweep
        NotebookDisplay.Show<Influence> StudySheets.ofInfluence
        NotebookDisplay.Show<StudyTable> StudySheets.ofTable
        NotebookDisplay.Show<GenericChart>(ChartDisplay.html, ChartDisplay.text)

        match KernelInvocationContext.Current with
        | null -> ()
        | context -> context.DisplayAs(ChartDisplay.library (), HtmlFormatter.MimeType) |> ignore
