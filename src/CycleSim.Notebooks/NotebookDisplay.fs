namespace CycleSim.Notebooks

open System
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

    static member private Show<'T>(html: 'T -> string, text: 'T -> string) =
        Formatter.Register<'T>(Func<'T, string> html, HtmlFormatter.MimeType)
        Formatter.Register<'T>(Func<'T, string> text, PlainTextFormatter.MimeType)
        Formatter.SetPreferredMimeTypesFor(typeof<'T>, HtmlFormatter.MimeType, PlainTextFormatter.MimeType)

    static member private Show<'T>(sheet: 'T -> Sheet) =
        NotebookDisplay.Show<'T>(sheet >> SheetHtml.write, sheet >> SheetText.write)

    /// Call it in the first cell, in C# or F#: registers how results are shown, as HTML and as plain text, and puts the
    /// drawing library of the charts into this cell's output. Outside a notebook it only registers.
    static member Register() =
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
        NotebookDisplay.Show<RatingMap>(fun map -> StudySheets.ofTable (map.Table [||]))
        NotebookDisplay.Show<ManoeuvreResult>(fun result -> StudySheets.ofTable (result.Table [||]))
        NotebookDisplay.Show<PowerTablesResult>(fun result -> StudySheets.ofTable (result.Table [||]))
        NotebookDisplay.Show<TakeOffRunResult>(fun result -> StudySheets.ofTable (result.Table [||]))
        NotebookDisplay.Show<Influence> StudySheets.ofInfluence
        NotebookDisplay.Show<StudyTable> StudySheets.ofTable
        NotebookDisplay.Show<GenericChart>(ChartDisplay.html, ChartDisplay.text)

        match KernelInvocationContext.Current with
        | null -> ()
        | context -> context.DisplayAs(ChartDisplay.library (), HtmlFormatter.MimeType) |> ignore
