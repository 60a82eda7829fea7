namespace CycleSim.Studies

open System
open System.Collections.Generic
open System.IO
open System.Runtime.InteropServices
open System.Security.Cryptography
open System.Text
open System.Threading

/// Rows of one block of a sweep, column by column. A number that does not exist is NaN.
type internal SweepBlock = {
    Index: int
    Rows: int
    Numbers: float[][]
    Texts: string[][]
    /// What `Encode` gave before; null where it has not been asked.
    mutable Bytes: byte[] | null
} with

    /// The block as bytes, the same for the same rows.
    member block.Encode() : byte[] =
        match block.Bytes with
        | null ->
            let bytes = block.Write()
            block.Bytes <- bytes
            bytes
        | bytes -> bytes

    /// Most texts of a column are alike: each is written once, then which one stands in which row.
    member private block.WriteTexts(stream: Stream) : unit =
        use writer = new BinaryWriter(stream, UTF8Encoding false, true)

        for column in block.Texts do
            let distinct = Array.distinct column
            let places = Dictionary<string, int>()
            writer.Write distinct.Length

            for text in distinct do
                places[text] <- places.Count
                writer.Write text

            for text in column do
                writer.Write(uint16 places[text])

    member private block.Write() : byte[] =
        use texts = new MemoryStream()
        block.WriteTexts texts
        let width = block.Rows * sizeof<float>

        let bytes =
            Array.zeroCreate<byte>(4 + block.Numbers.Length * width + int texts.Length)

        BitConverter.TryWriteBytes(Span bytes, block.Rows) |> ignore
        let mutable at = 4

        for column in block.Numbers do
            Buffer.BlockCopy(column, 0, bytes, at, width)
            at <- at + width

        texts.GetBuffer().AsSpan(0, int texts.Length).CopyTo(bytes.AsSpan at)
        bytes

    static member Decode(index: int, numbers: int, texts: int, bytes: byte[]) : SweepBlock =
        use reader = new BinaryReader(new MemoryStream(bytes), UTF8Encoding false)
        let rows = reader.ReadInt32()

        let column _ =
            let values = Array.zeroCreate<float> rows
            reader.BaseStream.ReadExactly(MemoryMarshal.AsBytes(Span values))
            values

        let text _ =
            let distinct = Array.init (reader.ReadInt32()) (fun _ -> reader.ReadString())
            Array.init rows (fun _ -> distinct[int (reader.ReadUInt16())])

        let numbers = Array.init numbers column
        let texts = Array.init texts text

        {
            Index = index
            Rows = rows
            Numbers = numbers
            Texts = texts
            Bytes = bytes
        }

/// Where finished blocks wait for their turn. Any thread may add; one thread takes them in order.
[<AbstractClass>]
type internal BlockStore() =
    let gate = obj ()
    abstract Holds: index: int -> bool
    abstract Keep: block: SweepBlock -> unit
    abstract Fetch: index: int -> SweepBlock

    member store.Add(block: SweepBlock) =
        lock gate (fun () ->
            store.Keep block
            Monitor.PulseAll gate)

    /// Waits for a block; `check` is asked now and then and throws where waiting is in vain.
    member store.Take(index: int, check: unit -> unit) : SweepBlock =
        lock gate (fun () ->
            while not (store.Holds index) do
                check ()
                Monitor.Wait(gate, 50) |> ignore

            store.Fetch index)

/// Blocks in memory, each given up when it is taken.
[<Sealed>]
type internal MemoryStore() =
    inherit BlockStore()
    let blocks = Dictionary<int, SweepBlock>()
    override _.Holds index = blocks.ContainsKey index
    override _.Keep block = blocks[block.Index] <- block

    override _.Fetch index =
        let block = blocks[index]
        blocks.Remove index |> ignore
        block

/// <summary>
/// Blocks in a file beside the result, so that a sweep that was stopped goes on from what it had: a header with the whole
/// question, then blocks in the order in which they were finished, each with its SHA-256. What a kill has cut off is
/// dropped when the file is opened again.
/// </summary>
[<Sealed>]
type internal FileStore
    private (stream: FileStream, numbers: int, texts: int, places: Dictionary<int, struct (int64 * int)>) =
    inherit BlockStore()

    // Blocks just finished wait in memory too, so that they need not be read back; only so many.
    let recent = Dictionary<int, SweepBlock>()
    let mostRecent = 64

    static let magic = "CycleSim sweep, unfinished 1\n"

    // Block number and length of its bytes ahead of it, checksum behind it.
    static let head = 8
    static let checksum = SHA256.HashSizeInBytes

    static let header (question: string) =
        let bytes = Encoding.UTF8.GetBytes(magic + question + "\n\n")
        Array.append (BitConverter.GetBytes bytes.Length) bytes

    static let difference (theirs: string) (ours: string) =
        let theirs, ours = theirs.TrimEnd().Split '\n', ours.TrimEnd().Split '\n'

        let line (lines: string[]) k =
            if k < lines.Length then lines[k] else "(nothing)"

        let first =
            Seq.initInfinite id
            |> Seq.takeWhile (fun k -> k < max theirs.Length ours.Length)
            |> Seq.find (fun k -> line theirs k <> line ours k)

        $"there it is '{line theirs first}', here '{line ours first}'"

    static let refuse path (found: byte[]) question =
        let text =
            if found.Length > 4 then
                Encoding.UTF8.GetString(found, 4, found.Length - 4)
            else
                ""

        if text.StartsWith magic then
            raise (
                SweepException
                    $"{path} holds the unfinished result of another sweep: {difference (text.Substring magic.Length) question}. Finish that sweep, delete the file, or write to another place."
            )
        else
            raise (SweepException $"{path} is in the way and is not an unfinished sweep; move it.")

    /// Finds the blocks that are whole; the first damaged byte and all behind it are cut off.
    static let recover (stream: FileStream) (from: int64) =
        let places = Dictionary<int, struct (int64 * int)>()
        let mutable position = from
        let mutable sound = true
        let front = Array.zeroCreate<byte> head

        while sound && position + int64 (head + checksum) <= stream.Length do
            stream.Position <- position
            stream.ReadExactly front
            let index = BitConverter.ToInt32(front, 0)
            let length = BitConverter.ToInt32(front, 4)

            if length < 4 || position + int64 (head + length + checksum) > stream.Length then
                sound <- false
            else
                let body = Array.zeroCreate<byte>(head + length + checksum)
                stream.Position <- position
                stream.ReadExactly body
                let sum = SHA256.HashData(ReadOnlySpan(body, 0, head + length))

                if sum.AsSpan().SequenceEqual(ReadOnlySpan(body, head + length, checksum)) then
                    places[index] <- struct (position, length)
                    position <- position + int64 body.Length
                else
                    sound <- false

        stream.SetLength position
        stream.Position <- position
        places

    /// <exception cref="T:CycleSim.Studies.SweepException">The file belongs to another sweep, or another run is writing it.</exception>
    static member Open(path: string, question: string, numbers: int, texts: int) : FileStore =
        let stream =
            try
                new FileStream(path, FileMode.OpenOrCreate, FileAccess.ReadWrite, FileShare.None)
            with :? IOException as error when File.Exists path ->
                raise (
                    SweepException
                        $"{path} cannot be opened; another run of this sweep may be writing it ({error.Message})"
                )

        try
            let wanted = header question
            let found = Array.zeroCreate<byte>(int (min stream.Length (int64 wanted.Length)))
            stream.ReadExactly found

            if not (found.AsSpan().SequenceEqual(ReadOnlySpan(wanted, 0, found.Length))) then
                let rest = Array.zeroCreate<byte>(int (min stream.Length 1_000_000L))
                stream.Position <- 0L
                stream.ReadExactly rest
                let length = if rest.Length > 4 then BitConverter.ToInt32(rest, 0) else 0
                refuse path (Array.truncate (4 + max 0 (min length (rest.Length - 4))) rest) question

            if found.Length < wanted.Length then
                stream.SetLength 0L
                stream.Write wanted
                stream.Flush()

            new FileStore(stream, numbers, texts, recover stream (int64 wanted.Length))
        with _ ->
            stream.Dispose()
            reraise ()

    override _.Holds index = places.ContainsKey index

    override _.Keep block =
        let bytes = block.Encode()
        let front = Array.zeroCreate<byte> head
        BitConverter.TryWriteBytes(Span(front, 0, 4), block.Index) |> ignore
        BitConverter.TryWriteBytes(Span(front, 4, 4), bytes.Length) |> ignore
        use hash = IncrementalHash.CreateHash HashAlgorithmName.SHA256
        hash.AppendData front
        hash.AppendData bytes
        stream.Seek(0L, SeekOrigin.End) |> ignore
        let position = stream.Position
        stream.Write front
        stream.Write bytes
        stream.Write(hash.GetHashAndReset())
        // Out of the process, so that a kill cannot take it back.
        stream.Flush()
        places[block.Index] <- struct (position, bytes.Length)

        if recent.Count < mostRecent then
            recent[block.Index] <- block

    override _.Fetch index =
        match recent.TryGetValue index with
        | true, block ->
            recent.Remove index |> ignore
            block
        | _ ->
            let struct (position, length) = places[index]
            stream.Position <- position + int64 head
            let bytes = Array.zeroCreate<byte> length
            stream.ReadExactly bytes
            SweepBlock.Decode(index, numbers, texts, bytes)

    interface IDisposable with
        member _.Dispose() = stream.Dispose()
