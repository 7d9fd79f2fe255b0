using System.Runtime.InteropServices;
using StreamLogit.Engine.Features;

namespace StreamLogit.Engine.Awaiting;

/// <summary>
/// A scored event as it lies in a segment: a header, its log-odds under every setting, the history keys that its label is for, its vector and its id.
/// A view of the segment's bytes, valid until the store changes.
/// </summary>
internal readonly ref struct KeptEvent(ReadOnlySpan<byte> bytes, int settings, int labelKeys)
{
    private readonly ReadOnlySpan<byte> _bytes = bytes;

    public ref readonly KeptHeader Header => ref MemoryMarshal.AsRef<KeptHeader>(_bytes);

    /// <summary>The log-odds that each setting gave when the event was scored.</summary>
    public ReadOnlySpan<double> LogOdds =>
        MemoryMarshal.Cast<byte, double>(_bytes.Slice(KeptHeader.Size, settings * sizeof(double)));

    /// <summary>The keys of the histories that learn its label.</summary>
    public ReadOnlySpan<ulong> LabelKeys =>
        MemoryMarshal.Cast<byte, ulong>(_bytes.Slice(KeptHeader.Size + settings * sizeof(double), labelKeys * sizeof(ulong)));

    /// <summary>The features as they were at scoring.</summary>
    public EncodedVector Vector
    {
        get
        {
            int entries = Header.Entries;
            int values = VectorStart;
            int slots = values + entries * sizeof(double);
            return new(
                MemoryMarshal.Cast<byte, int>(_bytes.Slice(slots, entries * sizeof(int))),
                MemoryMarshal.Cast<byte, double>(_bytes.Slice(values, entries * sizeof(double))));
        }
    }

    public ReadOnlySpan<byte> Id =>
        _bytes.Slice(VectorStart + Header.Entries * (sizeof(double) + sizeof(int)), Header.IdLength);

    private int VectorStart => KeptHeader.Size + settings * sizeof(double) + labelKeys * sizeof(ulong);

    /// <summary>What its label counts: the weight that comes with the label, or else the event's own, for every event that it stands for.</summary>
    /// <param name="labelWeight">The weight that comes with the label, or NaN.</param>
    public double WeightOf(double labelWeight)
    {
        double weight = !double.IsNaN(labelWeight) ? labelWeight : double.IsNaN(Header.Weight) ? 1 : Header.Weight;
        return weight * Header.StandsFor;
    }

    /// <summary>The bytes that an event takes, a multiple of 8 so that the next one is aligned.</summary>
    public static int SizeOf(int settings, int labelKeys, int entries, int idLength) =>
        (KeptHeader.Size + settings * sizeof(double) + labelKeys * sizeof(ulong) + entries * (sizeof(double) + sizeof(int)) + idLength + 7) & ~7;

    /// <summary>Lays out an event in <paramref name="target"/>, which has the length that <see cref="SizeOf"/> gives.</summary>
    public static void Write(
        Span<byte> target, in KeptHeader header, ReadOnlySpan<double> logOdds, ReadOnlySpan<ulong> labelKeys, in EncodedVector vector, ReadOnlySpan<byte> id)
    {
        MemoryMarshal.Write(target, header);
        var rest = target[KeptHeader.Size..];
        rest = Put(rest, MemoryMarshal.AsBytes(logOdds));
        rest = Put(rest, MemoryMarshal.AsBytes(labelKeys));
        rest = Put(rest, MemoryMarshal.AsBytes(vector.Values));
        rest = Put(rest, MemoryMarshal.AsBytes(vector.Slots));
        Put(rest, id).Clear();

        static Span<byte> Put(Span<byte> target, ReadOnlySpan<byte> source)
        {
            source.CopyTo(target);
            return target[source.Length..];
        }
    }
}
