namespace StreamLogit.Engine.Records;

/// <summary>
/// A run of records on their way through the worker: the source adds their bytes, the decoder reads them, the engine scores them.
/// Reused without allocation once it has grown to its working size.
/// </summary>
public sealed class RecordBatch
{
    /// <summary>
    /// How many bytes there are at least behind the last one in use, whatever they hold. The decoder reads several bytes at once and may
    /// reach so far.
    /// </summary>
    internal const int Padding = 256;

    private byte[] _bytes = new byte[1 << 12];
    private DecodedRecord[] _records = new DecodedRecord[16];
    private FieldValue[] _fields;
    private readonly int _fieldCount;
    private readonly List<int> _rejects = [];
    private int _total; // with the records of earlier batches that are given back as rejects

    /// <summary>An empty batch for records of a schema.</summary>
    public RecordBatch(RecordSchema schema)
    {
        ArgumentNullException.ThrowIfNull(schema);
        _fieldCount = schema.Fields.Length;
        _fields = new FieldValue[_records.Length * _fieldCount];
    }

    /// <summary>Where the records come from, as positions name it: a file name, a topic.</summary>
    public string Origin { get; set; } = "";

    /// <summary>How many records it holds.</summary>
    public int Count { get; private set; }

    /// <summary>How many bytes it holds: those of its records, a NUL behind each, and their unescaped texts.</summary>
    public int ByteCount { get; private set; }

    /// <summary>The records.</summary>
    public Span<DecodedRecord> Records => _records.AsSpan(0, Count);

    /// <summary>
    /// The records that cannot be used, in the order in which that became known, once the engine has seen the batch. Some may be labels of earlier batches
    /// that waited for their event in vain; those are beyond <see cref="Count"/>.
    /// </summary>
    public IReadOnlyList<int> Rejects => _rejects;

    /// <summary>The bytes of all records.</summary>
    public ReadOnlySpan<byte> Bytes => _bytes.AsSpan(0, ByteCount);

    /// <summary>The fields of a record, in the schema's order.</summary>
    public Span<FieldValue> Fields(int record) => _fields.AsSpan(record * _fieldCount, _fieldCount);

    /// <summary>A record, also one beyond <see cref="Count"/>.</summary>
    public ref readonly DecodedRecord Record(int record) => ref _records[record];

    /// <summary>Where a record comes from, as positions name it.</summary>
    public string OriginOf(int record) => _records[record].Origin ?? Origin;

    /// <summary>The bytes of a record as they came.</summary>
    public ReadOnlySpan<byte> RecordBytes(int record) => Bytes.Slice(_records[record].Start, _records[record].Length);

    /// <summary>The id of a record as UTF-8, unescaped.</summary>
    public ReadOnlySpan<byte> Id(int record) => Bytes.Slice(_records[record].IdStart, _records[record].IdLength);

    /// <summary>Empties the batch and keeps its memory.</summary>
    public void Clear()
    {
        Count = 0;
        _total = 0;
        ByteCount = 0;
        _rejects.Clear();
    }

    /// <summary>
    /// Becomes a copy of a batch that no engine has seen yet, so that several engines can see it. Where the other batch was made for other fields,
    /// its bytes are copied and the records are still to be decoded.
    /// </summary>
    public void CopyFrom(RecordBatch other)
    {
        Clear();
        Origin = other.Origin;
        other.Bytes.CopyTo(Append(other.ByteCount));
        while (_records.Length < other.Count)
        {
            Array.Resize(ref _records, _records.Length * 2);
            Array.Resize(ref _fields, _records.Length * _fieldCount);
        }
        other.Records.CopyTo(_records);
        if (_fieldCount == other._fieldCount) other._fields.AsSpan(0, other.Count * _fieldCount).CopyTo(_fields);
        Count = _total = other.Count;
    }

    /// <summary>Adds the bytes of a record that is still to be decoded.</summary>
    /// <param name="record">The bytes, without the line end.</param>
    /// <param name="position">Its number in the origin.</param>
    public void Add(ReadOnlySpan<byte> record, long position)
    {
        AddRecord(record, position);
        Count++;
    }

    /// <summary>Adds the first bytes of a record that is longer than the definition allows, already a reject.</summary>
    public void AddTooLong(ReadOnlySpan<byte> firstBytes, long position, string detail)
    {
        Add(firstBytes, position);
        Reject(Count - 1, RejectReason.TooLong, detail);
    }

    /// <summary>Turns a record into a reject.</summary>
    public void Reject(int record, RejectReason reason, string? detail = null)
    {
        _records[record].Kind = RecordKind.Reject;
        _records[record].Reason = reason;
        _records[record].Detail = detail;
    }

    /// <summary>Takes records out of a batch that the engine has not seen yet.</summary>
    /// <param name="isKept">Whether a record stays.</param>
    public void Keep(Func<DecodedRecord, bool> isKept)
    {
        int kept = 0;
        for (int record = 0; record < Count; record++)
        {
            if (!isKept(_records[record])) continue;
            if (kept != record)
            {
                _records[kept] = _records[record];
                Fields(record).CopyTo(Fields(kept));
            }
            kept++;
        }
        Count = _total = kept;
    }

    /// <summary>Lists a record among the rejects of the batch.</summary>
    internal void ListReject(int record) => _rejects.Add(record);

    /// <summary>Adds a record of an earlier batch that turned out to be unusable now, and lists it among the rejects.</summary>
    internal void ListLateReject(string origin, long position, ReadOnlySpan<byte> record, RejectReason reason, string detail)
    {
        AddRecord(record, position);
        _records[_total - 1].Origin = origin;
        Reject(_total - 1, reason, detail);
        ListReject(_total - 1);
    }

    /// <summary>Makes room for text behind the records, where the decoder puts what it unescapes.</summary>
    internal Span<byte> Append(int length)
    {
        if (_bytes.Length - ByteCount < length + Padding)
            Array.Resize(ref _bytes, Math.Max(_bytes.Length * 2, ByteCount + length + Padding));
        ByteCount += length;
        return _bytes.AsSpan(ByteCount - length, length);
    }

    private void AddRecord(ReadOnlySpan<byte> record, long position)
    {
        if (_total == _records.Length)
        {
            Array.Resize(ref _records, _total * 2);
            Array.Resize(ref _fields, _total * 2 * _fieldCount);
        }
        _records[_total++] = new DecodedRecord { Start = ByteCount, Length = record.Length, Position = position };
        var target = Append(record.Length + 1);
        record.CopyTo(target);
        target[record.Length] = 0;
    }
}
