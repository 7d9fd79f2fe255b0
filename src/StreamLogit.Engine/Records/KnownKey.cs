using System.Runtime.CompilerServices;
using System.Runtime.InteropServices;
using System.Text;

namespace StreamLogit.Engine.Records;

/// <summary>A key of an object, with what is read from its value.</summary>
/// <remarks>
/// Records of one stream mostly have the same keys in the same order. So every key remembers which came behind it last, and
/// these are compared first, quotes, colon and all, by two loads: no end of string is looked for and nothing is hashed.
/// This memory changes how fast records are read, never what is read.
/// </remarks>
internal sealed unsafe class KnownKey
{
    /// <summary>The longest key, with its quotes and colon, that is compared directly. Shorter than <see cref="RecordBatch.Padding"/>.</summary>
    public const int LongestText = 128;

    /// <summary>Eight bytes that stand in no UTF-8.</summary>
    private const ulong NoText = ulong.MaxValue;

    /// <summary>Stands where no key is known.</summary>
    public static readonly KnownKey None = CreateUnmatched();

    private readonly byte[] _text;
    private readonly ulong _head;
    private readonly ulong _headMask;
    private readonly ulong _tail;
    private readonly ulong _tailMask;
    private readonly int _tailAt;
    private readonly bool _isLong;

    /// <summary>A key whose value is not read yet.</summary>
    public KnownKey(ReadOnlySpan<byte> name)
    {
        Name = name.ToArray();
        Parts = [];
        Next = OtherNext = None;
        _text = [(byte)'"', .. name, .. "\":"u8];
        Length = _text.Length;
        _isLong = Length > 16;
        Span<byte> padded = stackalloc byte[8];
        _text.AsSpan(0, Math.Min(Length, 8)).CopyTo(padded);
        _head = MemoryMarshal.Read<ulong>(padded);
        padded[..Math.Min(Length, 8)].Fill(0xFF);
        _headMask = MemoryMarshal.Read<ulong>(padded);
        if (Length > 8)
        {
            _tailAt = Length - 8;
            _tail = MemoryMarshal.Read<ulong>(_text.AsSpan(_tailAt));
            _tailMask = ulong.MaxValue;
        }
        bool isPlain = name.IndexOfAnyInRange((byte)0, (byte)0x1F) < 0 && name.IndexOfAny((byte)'"', (byte)'\\') < 0;
        if (!isPlain || Length > LongestText) _head = _headMask = NoText;
    }

    private KnownKey()
    {
        Name = _text = [];
        Parts = [];
        Next = OtherNext = None ?? this;
        _head = _headMask = NoText;
    }

    /// <summary>Its name, unescaped.</summary>
    public byte[] Name { get; }

    /// <summary>What its value is read for, if it is not an object.</summary>
    public RecordPart[] Parts { get; private set; }

    /// <summary>The keys within its value that are read, or null.</summary>
    public KnownObject? Inner { get; set; }

    /// <summary>The key that stands for the same path by another way, or null.</summary>
    public KnownKey? Twin { get; set; }

    /// <summary>The key that came behind it last.</summary>
    public KnownKey Next { get; set; }

    /// <summary>The one that came behind it before that: events and labels by turns go on in two ways.</summary>
    public KnownKey OtherNext { get; set; }

    /// <summary>The number of the record in which it was seen last.</summary>
    public long SeenIn { get; set; }

    /// <summary>How its value is read.</summary>
    public KeyUse Use { get; private set; }

    /// <summary>The field that its value gives, where its use is one number or category.</summary>
    public int Field { get; private set; }

    /// <summary>The length of the name with its quotes and the colon.</summary>
    public int Length { get; }

    /// <summary>A key that stands nowhere in a record and matches nothing.</summary>
    public static KnownKey CreateUnmatched() => new();

    /// <summary>Reads its value for one more part.</summary>
    public void Add(RecordPart part) => Parts = [.. Parts, part];

    /// <summary>Settles its use, once all parts are known.</summary>
    public void Settle()
    {
        Use = Parts.Length == 0 && Inner is null ? KeyUse.Unread : KeyUse.General;
        if (Parts.Length != 1 || Inner is not null || Twin is not null) return;
        Field = Parts[0].Field;
        Use = (Parts[0].Role, Parts[0].Use) switch
        {
            (PartRole.Id, _) => KeyUse.Id,
            (PartRole.Time, _) => KeyUse.Time,
            (PartRole.Field, FieldUse.Number) => KeyUse.Number,
            (PartRole.Field, FieldUse.Category) => KeyUse.Category,
            _ => KeyUse.General,
        };
    }

    /// <summary>Whether this key stands here, quotes and colon included, without escapes and blanks.</summary>
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public bool Matches(byte* at)
    {
        ulong different = (Unsafe.ReadUnaligned<ulong>(at) ^ _head) & _headMask | (Unsafe.ReadUnaligned<ulong>(at + _tailAt) ^ _tail) & _tailMask;
        return different == 0 && (!_isLong || new ReadOnlySpan<byte>(at, Length).SequenceEqual(_text));
    }

    /// <inheritdoc/>
    public override string ToString() => Encoding.UTF8.GetString(Name);
}
