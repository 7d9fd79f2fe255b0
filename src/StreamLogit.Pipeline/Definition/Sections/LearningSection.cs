using System.Collections.Immutable;
using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Learning;

namespace StreamLogit.Pipeline.Definition.Sections;

/// <summary><c>learning</c>: the bank of settings and what is published of it.</summary>
internal static class LearningSection
{
    private const int FewestSlotsExponent = 4;
    private const int MostSlotsExponent = 26;
    private const string Blend = "blend";

    /// <summary>The options, and the file of the warm start where there is one.</summary>
    /// <param name="value">The section, or null where there is none.</param>
    /// <param name="features">The features, or null where they are wrong.</param>
    /// <param name="files">Reads paths.</param>
    /// <param name="use">What the definition is read for.</param>
    public static (LearningOptions Options, string? WarmStartPath) Read(
        ValueReader? value, ImmutableArray<FeatureOptions>? features, FilePaths files, DefinitionUse use)
    {
        var defaults = new LearningOptions { Bank = DefaultBank.For(features ?? []) };
        if (value?.Object() is not { } section) return (defaults, null);
        var slotsKey = section.Optional("slots");
        int? slots = slotsKey?.PowerOfTwo(FewestSlotsExponent, MostSlotsExponent);
        ulong? hashSeed = section.Optional("hashSeed")?.Unsigned();
        var bank = section.Optional("bank") is { } written ? BankSection.Read(written, features, defaults.Bank) : defaults.Bank;
        double? startProbability = section.Optional("startProbability")?.Number(NumberRange.BetweenZeroAndOne);
        var warmStartKey = section.Optional("warmStart");
        string? publish = ReadPublish(section.Optional("publish"), bank);
        double? switchRate = section.Optional("switchRate")?.Number(NumberRange.ZeroToOne);
        section.End();
        string? warmStartPath = files.Read(warmStartKey);
        var options = new LearningOptions
        {
            Slots = slots ?? defaults.Slots,
            HashSeed = hashSeed ?? defaults.HashSeed,
            Bank = bank ?? defaults.Bank,
            StartProbability = startProbability ?? defaults.StartProbability,
            WarmStart = warmStartPath is null || use == DefinitionUse.Fit ? null : ReadWarmStart(warmStartKey!, warmStartPath),
            PublishedSetting = publish,
            SwitchRate = switchRate ?? defaults.SwitchRate,
        };
        if (!CoefficientTables.CanBeMade(options))
            slotsKey?.Error($"{options.Slots} slots are too many for {options.Bank.Length} settings: one array cannot hold what they keep. Take fewer of either");
        return (options, warmStartPath);
    }

    private static FittedModel? ReadWarmStart(ValueReader key, string path)
    {
        try
        {
            return WarmStartFile.Read(path);
        }
        catch (Exception exception) when (exception is FileNotFoundException or DirectoryNotFoundException)
        {
            key.Error("there is no such file: streamlogit fit makes it");
        }
        catch (Exception exception) when (exception is IOException or UnauthorizedAccessException)
        {
            key.Error($"the file cannot be read: {exception.Message}");
        }
        catch (InvalidDataException exception)
        {
            key.Error($"the file cannot be used: {exception.Message}");
        }
        return null;
    }

    private static string? ReadPublish(ValueReader? value, ImmutableArray<SettingOptions>? bank)
    {
        if (value?.Text() is not { } name || name == Blend) return null;
        // Where the bank is wrong nobody can say which names are right.
        if (bank is not { } settings || settings.Any(setting => setting.Name == name)) return name;
        value.UnknownName([Blend, .. settings.Select(setting => setting.Name)]);
        return null;
    }
}
