namespace CycleSim.Studies

open System
open System.Collections.Generic
open System.IO
open System.Security.Cryptography
open System.Text
open System.Threading
open Parquet
open Parquet.Schema

/// Parts of a sweep, put together.
[<AbstractClass; Sealed>]
type SweepParts private () =

    static member private Refuse(message: string) : 'a = raise (SweepException message)

    static member private Opened<'a>(path: string, act: ParquetReader -> 'a) : 'a =
        use stream =
            try
                File.OpenRead path
            with :? IOException as error ->
                SweepParts.Refuse $"{path}: {error.Message}"

        let reader =
            try
                ParquetReader.CreateAsync(stream).GetAwaiter().GetResult()
            with error when not (error :? OperationCanceledException) ->
                SweepParts.Refuse $"{path} is not a Parquet file, or damaged: {error.Message}"

        try
            act reader
        finally
            reader.DisposeAsync().AsTask().GetAwaiter().GetResult()

    static member private Metadata(path: string) : Dictionary<string, string> =
        SweepParts.Opened(path, fun reader -> Dictionary reader.CustomMetadata)

    static member private Part(path: string, metadata: Dictionary<string, string>) : SweepPart =
        match metadata.TryGetValue SweepKeys.partKey with
        | true, text when metadata.ContainsKey SweepKeys.hash && metadata.ContainsKey SweepKeys.rows ->
            SweepPart.Read text
        | _ -> SweepParts.Refuse $"{path} is not a part of a sweep; parts are made by --part."

    /// Parts in their order, after making sure that they are all there, once each, and of one sweep.
    static member private Ordered(paths: string[]) : struct (string[] * Dictionary<string, string>) =
        if paths.Length = 0 then
            SweepParts.Refuse "name the parts to be joined."

        let all = paths |> Array.map (fun path -> struct (path, SweepParts.Metadata path))
        let struct (firstPath, first) = all[0]
        let count = SweepParts.Part(firstPath, first).Of
        let places = Dictionary<int, string>()

        for struct (path, metadata) in all do
            let part = SweepParts.Part(path, metadata)

            if metadata[SweepKeys.hash] <> first[SweepKeys.hash] then
                SweepParts.Refuse $"{path} is a part of another sweep than {firstPath}."

            if part.Of <> count then
                SweepParts.Refuse $"{path} is part {part}, but {firstPath} is one of {count}."

            match places.TryGetValue part.Number with
            | true, other -> SweepParts.Refuse $"{path} and {other} are both part {part}."
            | _ -> places[part.Number] <- path

        let missing =
            [| 1..count |]
            |> Array.filter (fun n -> not (places.ContainsKey n))
            |> Array.map (fun n -> $"{n}/{count}")

        if missing.Length > 0 then
            let names = String.concat ", " missing
            SweepParts.Refuse $"not all parts are there; missing: {names}."

        struct ([| for n in 1..count -> places[n] |], first)

    static member private Numbers(field: DataField) = field.ClrType = typeof<float>

    static member private ReadBlock(reader: ParquetReader, index: int) : SweepBlock =
        use group = reader.OpenRowGroupReader index
        let rows = int group.RowCount
        let fields = reader.Schema.DataFields

        let numbers (field: DataField) =
            let values = Array.zeroCreate<Nullable<float>> rows
            group.ReadAsync<float>(field, Memory values).AsTask().GetAwaiter().GetResult()
            values |> Array.map (fun v -> if v.HasValue then v.Value else nan)

        let texts (field: DataField) =
            let values = Array.zeroCreate<string> rows
            group.ReadAsync(field, Memory values).AsTask().GetAwaiter().GetResult()
            values

        {
            Index = index
            Rows = rows
            Numbers = fields |> Array.filter SweepParts.Numbers |> Array.map numbers
            Texts = fields |> Array.filter (fun f -> not (SweepParts.Numbers f)) |> Array.map texts
            Bytes = null
        }

    static member private Copy(path: string, sink: SweepSink, cancellation: CancellationToken) : int64 =
        SweepParts.Opened(
            path,
            fun reader ->
                let hash = RowsHash()
                let mutable rows = 0L

                for index in 0 .. reader.RowGroupCount - 1 do
                    cancellation.ThrowIfCancellationRequested()
                    let block = SweepParts.ReadBlock(reader, index)
                    hash.Add block
                    sink.Write block
                    rows <- rows + int64 block.Rows

                if hash.Value <> reader.CustomMetadata[SweepKeys.rows] then
                    SweepParts.Refuse
                        $"{path} is damaged: its rows are not those it was written with. Work that part out again."

                rows
        )

    /// <summary>
    /// Joins the parts of a sweep, given in any order, to the file that the whole sweep would have written, to the byte.
    /// Returns the number of rows.
    /// </summary>
    /// <exception cref="T:CycleSim.Studies.SweepException">A part is missing, twice there, damaged or of another sweep.</exception>
    /// <exception cref="T:System.IO.IOException">The file cannot be written; nothing is left behind.</exception>
    static member Join(path: string, parts: string[], cancellation: CancellationToken) : int64 =
        let struct (ordered, first) = SweepParts.Ordered parts

        let fields = SweepParts.Opened(ordered[0], fun reader -> reader.Schema.DataFields)

        let names chosen =
            fields |> Array.filter chosen |> Array.map _.Name

        let metadata =
            first
            |> Seq.filter (fun e -> e.Key <> SweepKeys.partKey && e.Key <> SweepKeys.rows)
            |> Seq.toArray

        let total = ref 0L

        WholeFile.Write(
            path,
            fun stream ->
                let sink: SweepSink =
                    ParquetSink.Open(
                        stream,
                        names SweepParts.Numbers,
                        names (fun f -> not (SweepParts.Numbers f)),
                        metadata
                    )

                for part in ordered do
                    total.Value <- total.Value + SweepParts.Copy(part, sink, cancellation)

                sink.Finish()
        )

        total.Value
