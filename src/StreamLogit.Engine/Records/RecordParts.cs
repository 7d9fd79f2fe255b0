using System.Runtime.CompilerServices;
using StreamLogit.Engine.Definition;

namespace StreamLogit.Engine.Records;

/// <summary>Turns the values of one record into its id, time, label, weight and fields.</summary>
internal sealed unsafe class RecordParts
{
    /// <summary>The largest magnitude of a number.</summary>
    public const double LargestNumber = 1e15;

    /// <summary>The largest weight.</summary>
    public const double LargestWeight = 1e6;

    private const string NumberWanted = "a number within -1e15 to 1e15";
    private const string WeightWanted = "a number from 0 to 1000000";

    private readonly LabelMapping _labels;
    private readonly RecordFault _fault;
    private readonly TimeFormat _timeFormat;
    private readonly Rfc3339Time _rfc3339 = new();
    private readonly string _timeWanted;
    private readonly RecordPart _id;
    private readonly RecordPart _time;
    private readonly bool _hasFields;

    private RecordBatch _batch = null!;
    private byte* _bytes;
    private FieldValue* _fields;
    private DecodedRecord _record;
    private byte[] _text = new byte[256];
    private bool _hasId;
    private bool _hasTime;
    private bool _hasLabel;
    private bool _hasFieldKey;

    /// <summary>The parts that a schema asks for.</summary>
    public RecordParts(RecordSchema schema, RecordFault fault)
    {
        var options = schema.Options;
        _fault = fault;
        _labels = new LabelMapping(options.LabelValues);
        _timeFormat = options.TimeFormat;
        _timeWanted = _timeFormat switch
        {
            TimeFormat.Rfc3339 => "an RFC 3339 date-time with an offset, as 2026-03-01T08:15:30.120Z,",
            TimeFormat.UnixSeconds => "a number of seconds since 1970",
            _ => "a number of milliseconds since 1970",
        };
        string?[] common = [options.Id, options.Time, options.Label, options.Weight, options.LabelTime];
        _id = new RecordPart(PartRole.Id, options.Id, -1, FieldUse.None, false);
        _time = new RecordPart(PartRole.Time, options.Time, -1, FieldUse.None, false);
        All =
        [
            _id,
            _time,
            new RecordPart(PartRole.Label, options.Label, -1, FieldUse.None, false),
            new RecordPart(PartRole.Weight, options.Weight, -1, FieldUse.None, false),
            .. options.LabelTime is { } labelTime ? [new RecordPart(PartRole.LabelTime, labelTime, -1, FieldUse.None, false)] : Array.Empty<RecordPart>(),
            .. schema.Fields.Select((field, index) =>
                new RecordPart(PartRole.Field, field.Path, index, field.Use, !common.Contains(field.Path))),
        ];
        _hasFields = All.Any(part => part.MakesEvent);
    }

    /// <summary>All parts, by rank.</summary>
    public RecordPart[] All { get; }

    /// <summary>Starts a record whose fields are empty.</summary>
    /// <param name="batch">The batch, for texts that are unescaped.</param>
    /// <param name="bytes">Its bytes as they are now. They stay where they are while the batch grows.</param>
    /// <param name="fields">The fields of the record.</param>
    public void Begin(RecordBatch batch, byte* bytes, FieldValue* fields)
    {
        _batch = batch;
        _bytes = bytes;
        _fields = fields;
        _record.Weight = double.NaN;
        _record.LabelTimeMicroseconds = DecodedRecord.NoTime;
        _hasId = _hasTime = _hasLabel = _hasFieldKey = false;
    }

    /// <summary>Takes a number for a field that is only a number. Returns false, having done nothing, if it is out of range.</summary>
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public bool TryTakeNumber(int field, double number)
    {
        if (!(Math.Abs(number) <= LargestNumber)) return false;
        FieldValue* value = _fields + field;
        value->Number = number;
        value->IsPresent = true;
        _hasFieldKey = true;
        return true;
    }

    /// <summary>Takes a text without escapes for a field that is only a category.</summary>
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public void TakeCategory(int field, byte* start, int length)
    {
        FieldValue* value = _fields + field;
        value->Hash = FieldHash.Of(new ReadOnlySpan<byte>(start, length));
        value->TextStart = (int)(start - _bytes);
        value->TextLength = length;
        value->IsPresent = true;
        _hasFieldKey = true;
    }

    /// <summary>Takes a text without escapes for the id. Returns false, having done nothing, if it is empty.</summary>
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public bool TryTakeId(byte* start, int length)
    {
        if (length == 0) return false;
        _hasId = true;
        _record.IdHash = FieldHash.Of(new ReadOnlySpan<byte>(start, length));
        _record.IdStart = (int)(start - _bytes);
        _record.IdLength = length;
        return true;
    }

    /// <summary>Takes a text without escapes for the time. Returns false, having done nothing, if it is not one.</summary>
    public bool TryTakeTime(byte* start, int length)
    {
        if (ReadTime(new ReadOnlySpan<byte>(start, length), out long microseconds) != TimeFault.None) return false;
        _record.TimeMicroseconds = microseconds;
        _hasTime = true;
        return true;
    }

    /// <summary>Reads a value for a part.</summary>
    public void Read(RecordPart part, in JsonToken token)
    {
        if (part.MakesEvent) _hasFieldKey = true;
        if (token.Kind == JsonKind.Null) return;
        switch (part.Role)
        {
            case PartRole.Field: ReadField(part, token); break;
            case PartRole.Id: ReadId(part, token); break;
            case PartRole.Time:
                _hasTime = true;
                ReadTime(part, token, out _record.TimeMicroseconds);
                break;
            case PartRole.LabelTime: ReadTime(part, token, out _record.LabelTimeMicroseconds); break;
            case PartRole.Label: ReadLabel(part, token); break;
            case PartRole.Weight: ReadWeight(part, token); break;
        }
    }

    /// <summary>The record has ended: what must be there is, and what it is follows.</summary>
    public void End(ref DecodedRecord record)
    {
        if (!_hasId) _fault.AddMissing(_id, RejectReason.IdMissing);
        if (!_hasTime) _fault.AddMissing(_time, RejectReason.TimeMissing);
        if (_fault.Reason != RejectReason.None) return;
        record.Kind = !_hasLabel ? RecordKind.Event : _hasFieldKey || !_hasFields ? RecordKind.LabelledEvent : RecordKind.Label;
        record.IdStart = _record.IdStart;
        record.IdLength = _record.IdLength;
        record.IdHash = _record.IdHash;
        record.TimeMicroseconds = _record.TimeMicroseconds;
        record.Label = _hasLabel ? _record.Label : 0;
        record.LabelTimeMicroseconds = _record.LabelTimeMicroseconds;
        record.Weight = _record.Weight;
    }

    private void ReadId(RecordPart part, in JsonToken token)
    {
        _hasId = true;
        if (token.Kind is not (JsonKind.String or JsonKind.Number))
        {
            _fault.Add(part, RejectReason.IdUnreadable, token, "a string or a number");
            return;
        }
        if (token.Length == 0) _fault.Add(part, RejectReason.IdEmpty, token, "a string with at least one character");
        _record.IdHash = KeepText(token, out _record.IdStart, out _record.IdLength);
    }

    private void ReadTime(RecordPart part, in JsonToken token, out long microseconds)
    {
        microseconds = 0;
        bool isReadable = token.Kind == JsonKind.String || token.Kind == JsonKind.Number && _timeFormat != TimeFormat.Rfc3339;
        if (!isReadable)
        {
            _fault.Add(part, RejectReason.TimeUnreadable, token, _timeWanted);
            return;
        }
        var fault = ReadTime(Text(token), out microseconds);
        if (fault == TimeFault.None) return;
        _fault.Add(part, RejectReason.TimeUnreadable, token, fault switch
        {
            TimeFault.NoOffset => "an offset from UTC behind the time, as Z or +02:00,",
            TimeFault.Calendar => "a day, a time of day and an offset that exist",
            TimeFault.Range => "a time in the years 0001 to 9999",
            _ => _timeWanted,
        });
    }

    private TimeFault ReadTime(ReadOnlySpan<byte> text, out long microseconds) => _timeFormat switch
    {
        TimeFormat.Rfc3339 => _rfc3339.Read(text, out microseconds),
        TimeFormat.UnixSeconds => UnixTime.Read(text, 6, out microseconds),
        _ => UnixTime.Read(text, 3, out microseconds),
    };

    private void ReadLabel(RecordPart part, in JsonToken token)
    {
        _hasLabel = true;
        bool isKnown = token.Kind switch
        {
            JsonKind.Number => _labels.TryGet(token.Number, out _record.Label),
            JsonKind.String => _labels.MayContain(token.Length) && _labels.TryGet(Text(token), out _record.Label),
            JsonKind.True or JsonKind.False => _labels.TryGet(token.Raw, out _record.Label),
            _ => false,
        };
        if (!isKnown) _fault.Add(part, RejectReason.LabelNotBinary, token, _labels.Wanted);
    }

    private void ReadWeight(RecordPart part, in JsonToken token)
    {
        if (token.Kind == JsonKind.Number && token.Number is >= 0 and <= LargestWeight)
            _record.Weight = token.Number + 0.0; // turns -0 into 0
        else
            _fault.Add(part, RejectReason.WeightOutOfRange, token, WeightWanted);
    }

    private void ReadField(RecordPart part, in JsonToken token)
    {
        ref var value = ref _fields[part.Field];
        value.IsPresent = true;
        if ((part.Use & FieldUse.Number) != 0)
        {
            if (token.Kind != JsonKind.Number)
            {
                _fault.Add(part, RejectReason.NumberUnreadable, token, "a number");
                return;
            }
            if (!(Math.Abs(token.Number) <= LargestNumber)) _fault.Add(part, RejectReason.NumberOutOfRange, token, NumberWanted);
            value.Number = token.Number;
        }
        if ((part.Use & FieldUse.Category) == 0) return;
        if (token.Kind is JsonKind.Object or JsonKind.Array)
        {
            _fault.Add(part, RejectReason.CategoryUnreadable, token, "a string, a number, true or false");
            return;
        }
        value.Hash = KeepText(token, out value.TextStart, out value.TextLength);
    }

    /// <summary>Where the text of a token stands in the batch's bytes, and its hash. Text with escapes is put behind the records.</summary>
    private ulong KeepText(in JsonToken token, out int start, out int length)
    {
        if (!token.IsEscaped)
        {
            start = (int)(token.Start - _bytes);
            length = token.Length;
            return FieldHash.Of(token.Raw);
        }
        var text = Text(token);
        text.CopyTo(_batch.Append(text.Length));
        start = _batch.ByteCount - text.Length;
        length = text.Length;
        return FieldHash.Of(text);
    }

    /// <summary>The text of a token, valid until the next call.</summary>
    private ReadOnlySpan<byte> Text(in JsonToken token)
    {
        if (!token.IsEscaped) return token.Raw;
        if (_text.Length < token.Length) Array.Resize(ref _text, Math.Max(token.Length, _text.Length * 2));
        return _text.AsSpan(0, JsonEscapes.Unescape(token.Raw, _text));
    }
}
