using System.Runtime.InteropServices;
using System.Runtime.Intrinsics;

namespace CycleSim.Gas;

/// <summary>
/// The temperature functions of a gas at one temperature and composition, with their partial derivatives.
/// Composition is (y, q): y the mass fraction of the stream that came from the fuel line of the model
/// (fuel-derived mass for the thermally perfect gas, share of burnt gas for the constant one), q the specific humidity of
/// the air that was taken in, kg of vapour per kg of moist air.
/// </summary>
/// <remarks>The groups of four are also one vector each: property, its slope over y, its slope over q.</remarks>
[StructLayout(LayoutKind.Sequential)]
public struct GasPoint
{
    /// <summary>Specific enthalpy including formation, J/kg.</summary>
    public double H;

    /// <summary>Temperature part of the specific entropy, J/(kg K): s = Phi - R ln p.</summary>
    public double Phi;

    /// <summary>Isobaric specific heat, J/(kg K), and its slope over temperature, J/(kg K2).</summary>
    public double Cp,
        CpT;

    /// <summary>Partial derivatives at constant temperature with respect to y.</summary>
    public double Hy,
        Phiy,
        Cpy,
        CpTy;

    /// <summary>Partial derivatives at constant temperature with respect to q.</summary>
    public double Hq,
        Phiq,
        Cpq,
        CpTq;

    /// <summary>Temperature, K.</summary>
    public double T;

    internal static void Fill(
        out GasPoint point,
        double t,
        Vector256<double> value,
        Vector256<double> perY,
        Vector256<double> perQ
    )
    {
        System.Runtime.CompilerServices.Unsafe.SkipInit(out point);
        value.StoreUnsafe(ref point.H);
        perY.StoreUnsafe(ref point.Hy);
        perQ.StoreUnsafe(ref point.Hq);
        point.T = t;
    }
}
