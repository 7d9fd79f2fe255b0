using System.Runtime.InteropServices;
using System.Runtime.Intrinsics;

namespace StreamLogit.Engine.Health.RollUps;

/// <summary>A row of numbers.</summary>
internal static class NumberRow
{
    /// <summary>Adds each of a row's first numbers to the one in its place. Numbers do not meet each other, so the bits are the same on every vector width.</summary>
    public static void Add(Span<double> target, ReadOnlySpan<double> values)
    {
        ref double t = ref MemoryMarshal.GetReference(target);
        ref double v = ref MemoryMarshal.GetReference(values);
        int count = Math.Min(target.Length, values.Length), i = 0;
        for (; i <= count - Vector256<double>.Count; i += Vector256<double>.Count)
            (Vector256.LoadUnsafe(ref t, (nuint)i) + Vector256.LoadUnsafe(ref v, (nuint)i)).StoreUnsafe(ref t, (nuint)i);
        for (; i < count; i++) target[i] += values[i];
    }

    /// <summary>Reads a row whose numbers may have other places now.</summary>
    /// <param name="reader">Where it is read from.</param>
    /// <param name="target">Receives the numbers; must be cleared where some have no saved one.</param>
    /// <param name="places">For each saved number its place, or -1 where it is gone; empty where they are the same.</param>
    public static void Read(BinaryReader reader, Span<double> target, ReadOnlySpan<int> places)
    {
        int count = places.IsEmpty ? target.Length : places.Length;
        for (int i = 0; i < count; i++)
        {
            double value = reader.ReadDouble();
            int place = places.IsEmpty ? i : places[i];
            if (place >= 0) target[place] = value;
        }
    }
}
