using System.Runtime.CompilerServices;
using System.Runtime.InteropServices;

namespace StreamLogit.Engine.Health;

/// <summary>What happened on the stream besides labels, as sums. All are doubles, so that a row of numbers can be looked at as these sums.</summary>
[StructLayout(LayoutKind.Sequential)]
internal struct StreamSums
{
    /// <summary>Events scored.</summary>
    public double Events;

    /// <summary>Events on which the decision was <c>alert</c>.</summary>
    public double Alerts;

    /// <summary>Sum over events of the published probability: the positives that were promised, labelled or not.</summary>
    public double Probability;

    /// <summary>Records rejected.</summary>
    public double Rejects;

    /// <summary>Events whose wait ended without a label.</summary>
    public double Expired;

    /// <summary>Labels that came after their event.</summary>
    public double LateLabels;

    /// <summary>The sum of their delays.</summary>
    public double DelaySeconds;

    /// <summary>Labels that were replaced by their opposite.</summary>
    public double Corrections;

    /// <summary>How many numbers these are.</summary>
    public static int Numbers => Unsafe.SizeOf<StreamSums>() / sizeof(double);

    /// <summary>The first numbers of a row, looked at as sums.</summary>
    public static ref StreamSums Of(Span<double> numbers) => ref Unsafe.As<double, StreamSums>(ref MemoryMarshal.GetReference(numbers[..Numbers]));
}
