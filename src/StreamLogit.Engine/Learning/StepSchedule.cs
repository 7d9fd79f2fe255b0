using System.Runtime.CompilerServices;
using StreamLogit.Engine.Numerics;

namespace StreamLogit.Engine.Learning;

/// <summary>The step of every setting for its k-th label: step / k^decay, without rounding of the power where decay is 0, 1/2 or 1.</summary>
internal sealed class StepSchedule<T> where T : struct, ILanes<T>
{
    private readonly AlignedDoubles _step;
    private readonly AlignedDoubles _decay;
    private readonly bool _isConstant = true;
    private readonly bool _needsPower;

    /// <param name="rowLength">Places in a row; those beyond the given settings get the step 0.</param>
    /// <param name="steps">The first step of each setting.</param>
    /// <param name="decays">The power by which it falls.</param>
    public StepSchedule(int rowLength, ReadOnlySpan<double> steps, ReadOnlySpan<double> decays)
    {
        _step = new AlignedDoubles(rowLength);
        _decay = new AlignedDoubles(rowLength);
        steps.CopyTo(_step.Span);
        decays.CopyTo(_decay.Span);
        foreach (double decay in decays)
        {
            if (decay != 0) _isConstant = false;
            if (decay is not (0 or 0.5 or 1)) _needsPower = true;
        }
    }

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public T Step(nuint lane, T k)
    {
        T step = T.Load(in _step.First, lane);
        return _isConstant ? step : step / Power(lane, k);
    }

    private T Power(nuint lane, T k)
    {
        T decay = T.Load(in _decay.First, lane);
        T power = _needsPower ? LaneMath.Exp(decay * LaneMath.Log(k)) : T.Of(1);
        power = T.Select(Equal(decay, T.Of(0.5)), T.Sqrt(k), power);
        return T.Select(Equal(decay, T.Of(1)), k, power);
    }

    private static T Equal(T left, T right) => T.GreaterOrEqual(left, right) & T.GreaterOrEqual(right, left);
}
