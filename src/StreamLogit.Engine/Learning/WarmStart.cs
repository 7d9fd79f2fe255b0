using System.Runtime.InteropServices;
using StreamLogit.Engine.Features;
using StreamLogit.Engine.Persistence;

namespace StreamLogit.Engine.Learning;

/// <summary>Coefficients that were fitted before. Every setting learns the difference from them, so whatever pulls coefficients pulls towards them.</summary>
internal sealed class WarmStart
{
    private const string Part = "learning/warm-start";
    private readonly double _intercept;
    private readonly double[] _coefficients;
    private bool _isSaved;

    /// <param name="intercept">The intercept.</param>
    /// <param name="coefficients">The coefficient of every slot.</param>
    public WarmStart(double intercept, ReadOnlySpan<double> coefficients)
    {
        _intercept = intercept;
        _coefficients = coefficients.ToArray();
    }

    public double Intercept => _intercept;

    public double this[int slot] => _coefficients[slot];

    /// <summary>The log-odds of an event by these coefficients.</summary>
    public double LogOdds(in EncodedVector x)
    {
        double sum = _intercept;
        for (int i = 0; i < x.Slots.Length; i++) sum += _coefficients[x.Slots[i]] * x.Values[i];
        return sum;
    }

    public void AddTo(in EncodedVector x, Span<double> coefficients)
    {
        for (int i = 0; i < x.Slots.Length; i++) coefficients[i] += _coefficients[x.Slots[i]];
    }

    public void Save(StateBlocks changes)
    {
        if (_isSaved) return;
        var numbers = new List<double> { _intercept };
        for (int slot = 0; slot < _coefficients.Length; slot++)
            if (_coefficients[slot] != 0) numbers.AddRange([slot, _coefficients[slot]]);
        changes.Put(Part, 0, MemoryMarshal.AsBytes<double>(CollectionsMarshal.AsSpan(numbers)));
        _isSaved = true;
    }

    /// <returns>Null where the saved bank had no warm start.</returns>
    /// <exception cref="InvalidStateException">The state is damaged.</exception>
    public static WarmStart? Load(StateBlocks state, int slotCount)
    {
        if (state.Find(Part, 0) is not { } bytes) return null;
        ReadOnlySpan<double> numbers = MemoryMarshal.Cast<byte, double>(bytes);
        double[] coefficients = new double[slotCount];
        for (int i = 1; i + 1 < numbers.Length; i += 2)
        {
            int slot = (int)numbers[i];
            if ((uint)slot >= (uint)slotCount) throw new InvalidStateException("The warm start is damaged.");
            coefficients[slot] = numbers[i + 1];
        }
        if (numbers.Length % 2 == 0) throw new InvalidStateException("The warm start is damaged.");
        return new WarmStart(numbers[0], coefficients) { _isSaved = true };
    }
}
