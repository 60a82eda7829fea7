namespace CycleSim.Studies

open System
open System.Collections.Generic
open System.Diagnostics
open System.IO
open System.Runtime.InteropServices
open System.Threading

/// Which part of a sweep is worked out: one of so many. The whole is 1 of 1.
[<Struct>]
type SweepPart = {
    Number: int
    Of: int
} with

    static member Whole = { Number = 1; Of = 1 }
    member part.IsWhole = part.Of = 1

    /// <exception cref="T:CycleSim.Studies.SweepException">Not of the form 3/64, or a number beyond the parts.</exception>
    static member Read(text: string) : SweepPart =
        match text.Split '/' |> Array.map Int32.TryParse with
        | [| true, number; true, count |] when number >= 1 && number <= count -> { Number = number; Of = count }
        | _ -> raise (SweepException $"'{text}' is no part of a sweep; write 3/64 for the third of sixty-four.")

    override part.ToString() = $"{part.Number}/{part.Of}"

    /// First block and the one behind the last.
    member internal part.Range(blocks: int) : struct (int * int) =
        let count = part.Of

        let bound k =
            int (int64 blocks * int64 k / int64 count)

        struct (bound (part.Number - 1), bound part.Number)

/// What became of a sweep.
type SweepSummary = {
    /// Rows of the result.
    Points: int
    Solved: int
    /// Points of the grid that lay outside the corridor, of the whole sweep.
    OutsideCorridor: int64
    /// Rows that an earlier run had left.
    Resumed: int
    /// How points without solution ended, and how many, the most frequent first.
    WithoutSolution: IReadOnlyList<KeyValuePair<string, int>>
    Seconds: float
} with

    /// Rows worked out in this run over its time.
    member summary.PointsPerSecond =
        float (summary.Points - summary.Resumed) / max summary.Seconds 1e-9

/// Rows of a sweep in memory.
type SweepResult = {
    Plan: SweepPlan
    Summary: SweepSummary
    Columns: IReadOnlyList<TableColumn>
} with

    /// The rows, and the question in the provenance.
    member result.Table(provenance: IReadOnlyList<KeyValuePair<string, string>>) : StudyTable =
        StudyTable.Of(
            $"Sweep of {result.Plan.Engine.Definition.Name}",
            [|
                yield! provenance
                KeyValuePair(SweepKeys.definition, result.Plan.Definition)
                KeyValuePair(SweepKeys.hash, result.Plan.Hash)
            |],
            result.Columns
        )

/// Files that a sweep is written to; null where not wanted.
type SweepFiles = {
    Parquet: string | null
    Csv: string | null
} with

    /// The file in which finished blocks wait; it lies beside the first of the files.
    member files.Unfinished: string =
        match files.Parquet, files.Csv with
        | null, null -> raise (SweepException "a sweep that is to be written needs a file.")
        | null, csv -> string csv + ".unfinished"
        | parquet, _ -> string parquet + ".unfinished"

/// Sweeps: many points over any inputs, on all cores, to memory or to files.
[<AbstractClass; Sealed>]
type Sweep private () =

    /// Works out what the store lacks on several threads while this one hands the blocks on in their order.
    static member private Execute
        (
            plan: SweepPlan,
            store: BlockStore,
            sinks: SweepSink[],
            part: SweepPart,
            threads: int,
            progress: Action<int64> | null,
            cancellation: CancellationToken
        ) : SweepSummary =
        if threads < 0 then
            raise (SweepException $"the number of threads must not be negative; {threads} was given.")

        let clock = Stopwatch.StartNew()
        let struct (first, behind) = part.Range plan.Blocks
        use ended = CancellationTokenSource.CreateLinkedTokenSource cancellation
        let failure: (exn | null) ref = ref null
        let next = ref (first - 1)
        let held = [| for index in first .. behind - 1 -> store.Holds index |]

        let work () =
            try
                let walk = lazy SweepWalk plan
                let mutable index = Interlocked.Increment next

                while index < behind do
                    if not held[index - first] then
                        store.Add(walk.Value.Block(index, ended.Token))

                    index <- Interlocked.Increment next
            with
            | :? OperationCanceledException -> ()
            | error ->
                Interlocked.CompareExchange(failure, error, null) |> ignore
                ended.Cancel()

        let count = if threads = 0 then Environment.ProcessorCount else threads

        let workers =
            Array.init (max 1 (min count (behind - first))) (fun _ -> Thread(work, 1 <<< 24))

        let mutable points = 0
        let mutable resumed = 0
        let endings = Dictionary<string, int>()

        let counted ending =
            match endings.TryGetValue ending with
            | true, n -> n
            | _ -> 0

        let receive (block: SweepBlock) =
            points <- points + block.Rows

            if held[block.Index - first] then
                resumed <- resumed + block.Rows

            for ending in block.Texts[plan.TextColumns.Length - 2] do
                endings[ending] <- 1 + counted ending

            for sink in sinks do
                sink.Write block

            match progress with
            | null -> ()
            | report -> report.Invoke(int64 points)

        try
            for worker in workers do
                worker.Start()

            try
                let check () =
                    ended.Token.ThrowIfCancellationRequested()

                for index in first .. behind - 1 do
                    check ()
                    receive (store.Take(index, check))
            finally
                ended.Cancel()

                for worker in workers do
                    worker.Join()
        with :? OperationCanceledException ->
            // Waiting is given up when a worker fails too; what it failed of is what there is to say.
            match failure.Value with
            | null -> reraise ()
            | error -> raise error

        for sink in sinks do
            sink.Finish()

        let solved = counted "solved"
        endings.Remove "solved" |> ignore

        {
            Points = points
            Solved = solved
            OutsideCorridor = plan.GridPoints - plan.Rows
            Resumed = resumed
            WithoutSolution = endings |> Seq.sortBy (fun e -> struct (-e.Value, e.Key)) |> Seq.toArray
            Seconds = clock.Elapsed.TotalSeconds
        }

    static member private Numbers(plan: SweepPlan) = [|
        for struct (name, _) in plan.NumberColumns do
            name
    |]

    /// <summary>The rows of a sweep in memory; the same bits whatever the number of threads.</summary>
    /// <param name="threads">0: one for each core</param>
    /// <param name="progress">told the number of rows so far</param>
    /// <param name="cancellation">ends the sweep between two points</param>
    /// <exception cref="T:System.OperationCanceledException">Cancelled.</exception>
    static member Run
        (
            plan: SweepPlan,
            [<Optional; DefaultParameterValue(0)>] threads: int,
            [<Optional; DefaultParameterValue(null: Action<int64> | null)>] progress: Action<int64> | null,
            [<Optional>] cancellation: CancellationToken
        ) : SweepResult =
        let table = TableSink plan

        let summary =
            Sweep.Execute(plan, MemoryStore(), [| table |], SweepPart.Whole, threads, progress, cancellation)

        {
            Plan = plan
            Summary = summary
            Columns = table.Columns
        }

    /// <summary>
    /// Writes a sweep, or a part of it, to files; the same bytes whatever the number of threads and however often it was
    /// stopped. Finished blocks wait in a file beside the result, from which the same call goes on; it is deleted at the end.
    /// </summary>
    /// <param name="provenance">what it takes to find the rows again; must not change from run to run</param>
    /// <param name="threads">0: one for each core</param>
    /// <param name="progress">told the number of rows so far</param>
    /// <param name="cancellation">ends the sweep between two points; finished blocks are kept</param>
    /// <exception cref="T:CycleSim.Studies.SweepException">What an earlier run left belongs to another sweep.</exception>
    /// <exception cref="T:System.OperationCanceledException">Cancelled.</exception>
    /// <exception cref="T:System.IO.IOException">A file cannot be written.</exception>
    static member Write
        (
            plan: SweepPlan,
            provenance: IReadOnlyList<KeyValuePair<string, string>>,
            files: SweepFiles,
            [<Optional; DefaultParameterValue(Nullable<SweepPart>())>] part: Nullable<SweepPart>,
            [<Optional; DefaultParameterValue(0)>] threads: int,
            [<Optional; DefaultParameterValue(null: Action<int64> | null)>] progress: Action<int64> | null,
            [<Optional>] cancellation: CancellationToken
        ) : SweepSummary =
        let part = if part.HasValue then part.Value else SweepPart.Whole
        let partText = if part.IsWhole then "" else part.ToString()

        let metadata =
            SweepKeys.metadata $"Sweep of {plan.Engine.Definition.Name}" provenance plan partText

        let question = $"{plan.Definition}\npart {part}"
        let numbers = Sweep.Numbers plan
        let texts = plan.TextColumns

        let summary =
            use store = FileStore.Open(files.Unfinished, question, numbers.Length, texts.Length)

            let execute sinks =
                Sweep.Execute(plan, store, sinks, part, threads, progress, cancellation)

            let mutable summary = Unchecked.defaultof<SweepSummary>

            let withCsv sinks =
                match files.Csv with
                | null -> execute sinks
                | path ->
                    let result = ref None

                    WholeFile.Write(
                        path,
                        fun stream ->
                            let sink = CsvSink(stream, Array.append numbers texts, metadata)
                            result.Value <- Some(execute (Array.append sinks [| sink |]))
                    )

                    result.Value.Value

            match files.Parquet with
            | null -> summary <- withCsv [||]
            | path ->
                let result = ref None

                WholeFile.Write(
                    path,
                    fun stream ->
                        let sink = ParquetSink.Open(stream, numbers, texts, metadata)
                        result.Value <- Some(withCsv [| sink |])
                )

                summary <- result.Value.Value

            summary

        File.Delete files.Unfinished
        summary
