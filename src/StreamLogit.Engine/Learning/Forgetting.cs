using System.Runtime.CompilerServices;
using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Numerics;

namespace StreamLogit.Engine.Learning;

/// <summary>How much of each setting's coefficients is left after some time: 2^(-time / half-life).</summary>
internal sealed class Forgetting<T> where T : struct, ILanes<T>
{
    private readonly AlignedDoubles _ratePerMicrosecond;

    public Forgetting(int rowLength, ReadOnlySpan<SettingOptions> settings)
    {
        _ratePerMicrosecond = new AlignedDoubles(rowLength);
        for (int lane = 0; lane < settings.Length; lane++)
        {
            long halfLife = settings[lane].ForgetHalfLifeMicroseconds;
            if (halfLife == 0) continue;
            _ratePerMicrosecond[lane] = Elementary.Ln2 / halfLife;
            IsNeeded = true;
        }
    }

    /// <summary>Whether any setting forgets; if not, every factor is 1.</summary>
    public bool IsNeeded { get; }

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public T Factor(nuint lane, double elapsedMicroseconds) =>
        LaneMath.Exp(T.Of(0) - T.Load(in _ratePerMicrosecond.First, lane) * T.Of(elapsedMicroseconds));

    /// <summary>A mask of the settings that forget.</summary>
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public T Mask(nuint lane) => T.Greater(T.Load(in _ratePerMicrosecond.First, lane), T.Of(0));
}
