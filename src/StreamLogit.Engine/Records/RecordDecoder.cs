using System.Text;
using System.Text.Unicode;

namespace StreamLogit.Engine.Records;

/// <summary>Reads the UTF-8 JSON of the records of a batch in one pass over their bytes, without allocation.</summary>
/// <remarks>
/// <para>
/// A record with several faults is rejected for the first of: longer than the definition allows; bytes that are not UTF-8; not JSON or
/// nested too deep, whichever comes first in it; a lone surrogate; not an object; a key twice; then what is wrong with the id, the time,
/// the label, the weight and the fields, in this order.
/// </para>
/// <para>
/// A label and no key of any field that the features read makes a label record. Fields at the path of the id, time, label or weight do not
/// count there; where a definition reads no others, every record is an event.
/// </para>
/// <para>
/// Remembers the order of keys between records, which changes its speed and never its results; so it can run on another thread than the
/// engine. One thread at a time may use it.
/// </para>
/// </remarks>
public sealed unsafe class RecordDecoder
{
    private readonly int _maximumBytes;
    private readonly int _maximumDepth;
    private readonly JsonFault _jsonFault = new();
    private readonly RecordFault _recordFault = new();
    private readonly OpenKeys _keys;
    private readonly SkippedValues _skipped;
    private readonly RecordParts _parts;
    private readonly ObjectReader _objects;
    private readonly KnownObject _root;

    /// <summary>A decoder for the records of a schema. Batches must be made for the same schema.</summary>
    public RecordDecoder(RecordSchema schema)
    {
        _maximumBytes = schema.Options.MaximumBytes;
        _maximumDepth = schema.Options.MaximumDepth;
        _keys = new OpenKeys(_jsonFault);
        _skipped = new SkippedValues(_maximumDepth, _jsonFault, _keys);
        _parts = new RecordParts(schema, _recordFault);
        _objects = new ObjectReader(_maximumDepth, _jsonFault, _recordFault, _parts, _keys, _skipped);
        _root = KnownObject.Build(_parts.All);
    }

    /// <summary>Decodes every record of the batch that is not a reject yet. What cannot be used becomes a reject with its reason.</summary>
    public void Decode(RecordBatch batch)
    {
        // Found out for all records at once, as it nearly always is so and then says that all are UTF-8. What is put behind them needs no check.
        bool isAscii = Ascii.IsValid(batch.Bytes);
        var records = batch.Records;
        for (int i = 0; i < records.Length; i++)
        {
            if (records[i].Reason == RejectReason.None) Decode(batch, i, ref records[i], isAscii);
        }
    }

    private void Decode(RecordBatch batch, int index, ref DecodedRecord record, bool isUtf8)
    {
        var fields = batch.Fields(index);
        fields.Clear();
        if (record.Length > _maximumBytes)
        {
            batch.Reject(index, RejectReason.TooLong, $"the record has {record.Length} bytes; at most {_maximumBytes} are wanted");
            return;
        }
        if (!isUtf8 && !Utf8.IsValid(batch.RecordBytes(index)))
        {
            batch.Reject(index, RejectReason.NotUtf8, "the bytes are not UTF-8");
            return;
        }
        fixed (byte* bytes = batch.Bytes)
        fixed (FieldValue* fieldValues = fields)
        {
            byte* start = bytes + record.Start;
            byte* end = start + record.Length;
            _jsonFault.Begin(start, end);
            _recordFault.Begin();
            _keys.Begin();
            _objects.Begin();
            _parts.Begin(batch, bytes, fieldValues);
            byte* first = JsonSyntax.SkipSpace(start);
            bool isObject = *first == '{';
            byte* behind = isObject ? _objects.Read(first, _root, 0) : _skipped.Skip(first, 0);
            if (behind != null)
            {
                behind = JsonSyntax.SkipSpace(behind);
                if (behind != end) _jsonFault.Stop(behind, "the end of the record");
            }
            if (_jsonFault.IsAny || !isObject)
            {
                RejectWhole(batch, index, *first);
                return;
            }
            _objects.End();
            _parts.End(ref record);
        }
        if (_recordFault.Reason != RejectReason.None) batch.Reject(index, _recordFault.Reason, _recordFault.Detail);
    }

    private void RejectWhole(RecordBatch batch, int index, byte first)
    {
        if (_jsonFault.IsTooDeep)
        {
            batch.Reject(index, RejectReason.TooDeep,
                $"at byte {_jsonFault.StopByte} objects and arrays are nested deeper than {_maximumDepth}");
        }
        else if (_jsonFault.IsStopped)
        {
            batch.Reject(index, RejectReason.NotJson, _jsonFault.DescribeStop());
        }
        else if (_jsonFault.HasLoneSurrogate)
        {
            batch.Reject(index, RejectReason.NotUtf8, $"the escape at byte {_jsonFault.SurrogateByte} is half of a surrogate pair");
        }
        else if (first != '{')
        {
            string found = first switch
            {
                (byte)'[' => "an array",
                (byte)'"' => "a string",
                (byte)'t' or (byte)'f' => "a boolean",
                (byte)'n' => "null",
                _ => "a number",
            };
            batch.Reject(index, RejectReason.NotObject, $"the record is {found}; an object is wanted");
        }
        else
        {
            batch.Reject(index, RejectReason.DuplicateKey, $"the key '{_jsonFault.DuplicateKey}' stands twice in one object");
        }
    }
}
